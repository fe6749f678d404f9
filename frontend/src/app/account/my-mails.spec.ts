import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting, type TestRequest } from '@angular/common/http/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { FaultHarness } from '../ui/states.harness';
import { SegmentedHarness } from '../ui/segmented.harness';
import { Toasts } from '../ui/toasts';
import { ToastsHarness } from '../ui/toasts.harness';
import { MyMails } from './my-mails';

const PATH = '/api/me/preferences';
const NOT_SAID = { theme: null, scale: null, shortcuts: null };
const both = (newBrowser: 'on' | 'off', role: 'on' | 'off') => ({
  ...NOT_SAID,
  mails: { 'new-browser': newBrowser, role, mention: 'on', 'out-of-date': 'on' },
});

@Component({
  selector: 'sw-mails-and-toasts',
  imports: [MyMails, Toasts],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: '<sw-my-mails /><sw-toasts />',
})
class MailsAndToasts {}

/** Until what was asked for is on its way, or has been drawn. */
const settled = async (): Promise<void> => {
  for (let turn = 0; turn < 3; turn += 1) {
    TestBed.tick();
    await new Promise((resolve) => setTimeout(resolve));
  }
};

describe('the mails that someone gets', () => {
  let http: HttpTestingController;
  let loader: ReturnType<typeof TestbedHarnessEnvironment.loader>;

  beforeEach(async () => {
    localStorage.clear();
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection(), provideHttpClient(), provideHttpClientTesting()] });
    loader = TestbedHarnessEnvironment.loader(TestBed.createComponent(MailsAndToasts));
    http = TestBed.inject(HttpTestingController);
    await settled();
  });
  afterEach(() => http.verify());

  const switchOf = (label: string) => loader.getHarness(SegmentedHarness.with({ label }));
  const said = async () => (await loader.getHarness(ToastsHarness)).said();

  it('each have a switch that stands as the server says', async () => {
    http.expectOne(PATH).flush(both('off', 'on'));
    await settled();
    expect(await Promise.all((await loader.getAllHarnesses(SegmentedHarness)).map((one) => one.label()))).toEqual([
      'New browser',
      'Your roles',
      'Mentions',
      'Out of date',
    ]);
    expect(await (await switchOf('New browser')).chosen()).toBe('Off');
    expect(await (await switchOf('Your roles')).chosen()).toBe('On');
  });

  /** Presses a switch; a harness waits for what was asked for, so that it is answered meanwhile. */
  async function press(label: string, word: string): Promise<TestRequest> {
    void (await switchOf(label)).choose(word);
    await settled();
    return http.expectOne(PATH);
  }

  it('are saved at the press of a switch, that kind alone, with a word about it', async () => {
    http.expectOne(PATH).flush(both('on', 'on'));
    await settled();
    const asked = await press('Your roles', 'Off');
    expect([asked.request.method, asked.request.body]).toEqual(['PATCH', { mails: { role: 'off' } }]);
    asked.flush(both('on', 'off'));
    await settled();
    expect(await said()).toEqual(['Mails off: Your roles.']);
    expect(await (await switchOf('Your roles')).chosen()).toBe('Off');
    expect(await (await switchOf('New browser')).chosen()).toBe('On');
    (await press('Your roles', 'On')).flush(both('on', 'on'));
    await settled();
    expect(await said()).toEqual(['Mails off: Your roles.', 'Mails on: Your roles.']);
  });

  it('stay as they were where the server does not take it, and say so', async () => {
    http.expectOne(PATH).flush(both('on', 'on'));
    await settled();
    (await press('New browser', 'Off')).flush({ detail: 'The server is busy.' }, { status: 503, statusText: 'Service Unavailable' });
    await settled();
    expect(await said()).toEqual(['The server is busy.']);
    expect(await (await switchOf('New browser')).chosen()).toBe('On');
  });

  it('ask nothing where a switch stands already', async () => {
    http.expectOne(PATH).flush(both('on', 'on'));
    await settled();
    await (await switchOf('New browser')).choose('On');
    http.expectNone(PATH);
  });

  it('say that they could not be loaded, and are asked for again', async () => {
    http.expectOne(PATH).flush({ detail: 'The server is busy.' }, { status: 503, statusText: 'Service Unavailable' });
    await settled();
    const fault = await loader.getHarness(FaultHarness);
    expect(await fault.text()).toContain('What you chose could not be loaded. The server is busy.');
    void fault.tryAgain();
    await settled();
    http.expectOne(PATH).flush(both('on', 'off'));
    await settled();
    expect(await (await switchOf('Your roles')).chosen()).toBe('Off');
  });
});

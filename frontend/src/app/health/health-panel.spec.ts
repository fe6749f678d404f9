import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting, type TestRequest } from '@angular/common/http/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideZonelessChangeDetection } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { HealthPanel } from './health-panel';

const ASK_EVERY_MS = 15_000;
const answer = {
  status: 'ok',
  version: '0.1.0',
  database: 'answers',
  migrations: 1,
  deployment: { createdAt: '2026-12-01T11:23:27.998Z' },
};
const problem = { detail: 'The database file was moved.', id: '3f0c5f6e-9a53-4b44-8f0a-5d8dd3bb1a0e' };
const unavailable = { status: 503, statusText: 'Service Unavailable' };

describe('the health panel', () => {
  let fixture: ComponentFixture<HealthPanel>;
  let http: HttpTestingController;

  beforeEach(() => {
    vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval', 'Date'], now: new Date('2026-12-02T10:00:00Z') });
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection(), provideHttpClient(), provideHttpClientTesting()] });
    fixture = TestBed.createComponent(HealthPanel);
    http = TestBed.inject(HttpTestingController);
  });
  afterEach(() => {
    vi.useRealTimers();
  });

  /** The request that is open now. */
  function asked(): TestRequest {
    TestBed.tick();
    return http.expectOne('/api/health');
  }
  /** What a person reads once the panel has drawn what it knows. */
  async function words(): Promise<string> {
    for (let turn = 0; turn < 2; turn++) {
      TestBed.tick();
      await new Promise((resolve) => setTimeout(resolve));
    }
    const blocks = (fixture.nativeElement as HTMLElement).querySelectorAll('p, dt, dd, button');
    return [...blocks].map((block) => block.textContent.replace(/\s+/g, ' ').trim()).join(' ');
  }

  it('says that it asks until the answer is there', async () => {
    const request = asked();
    expect(await words()).toBe('Asking the database.');
    request.flush(answer);
    expect(await words()).toContain('The database answers.');
  });

  it('prints the instant with its scale', async () => {
    asked().flush(answer);
    expect(await words()).toContain('Made 2026-12-01 11:23:27 UTC');
  });

  it('gives the sentence and the id of a problem', async () => {
    asked().flush(problem, unavailable);
    const text = await words();
    expect(text).toContain('The database does not answer. The database file was moved.');
    expect(text).toContain(`In the log under ${problem.id}`);
  });

  it('says so when the answer is no answer', async () => {
    asked().flush({ status: 'ok' });
    expect(await words()).toContain('The server answered what this page cannot read');
  });

  it('names the status when a fault has no sentence', async () => {
    asked().flush('<html>', { status: 502, statusText: 'Bad Gateway' });
    expect(await words()).toContain('The server answered with status 502.');
  });

  it('says when the server last answered once it is silent', async () => {
    asked().flush(answer);
    await words();
    vi.advanceTimersByTime(ASK_EVERY_MS);
    asked().error(new ProgressEvent('error'));
    expect(await words()).toContain('The server does not answer. It last did at 2026-12-02 10:00:00 UTC.');
    vi.advanceTimersByTime(ASK_EVERY_MS);
    asked().error(new ProgressEvent('error'));
    expect(await words()).toContain('It last did at 2026-12-02 10:00:00 UTC.');
  });

  it('keeps what it knows while it asks again', async () => {
    asked().flush(answer);
    await words();
    vi.advanceTimersByTime(ASK_EVERY_MS);
    const request = asked();
    expect(await words()).toContain('The database answers.');
    request.flush(problem, unavailable);
    expect(await words()).toContain('The database does not answer.');
  });

  it('asks again at the press of the button, once at a time', async () => {
    asked().flush(problem, unavailable);
    await words();
    const button = await TestbedHarnessEnvironment.loader(fixture).getHarness(MatButtonHarness.with({ text: 'Ask again' }));
    void button.click();
    await words();
    const request = asked();
    expect(await words()).toContain('The database does not answer.');
    request.flush(answer);
    expect(await words()).not.toContain('Ask again');
  });

  it('asks no more once it is gone', async () => {
    asked().flush(answer);
    await words();
    fixture.destroy();
    vi.advanceTimersByTime(ASK_EVERY_MS * 3);
    http.expectNone('/api/health');
  });
});

import { ChangeDetectionStrategy, Component, provideZonelessChangeDetection, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { provideRouter, Router } from '@angular/router';
import { beforeEach, describe, expect, it } from 'vitest';
import { ToastStore } from '../ui/toasts';
import { ConnectionStore } from './connection-store';
import { WaitingPage } from './waiting-page';

@Component({ selector: 'sw-some-page', template: '', changeDetection: ChangeDetectionStrategy.OnPush })
class SomePage {}

describe('a page that cannot be fetched', () => {
  const offline = signal(false);
  let isAway = false;
  let answers = false;
  let tries = 0;
  let router: Router;

  beforeEach(async () => {
    offline.set(false);
    isAway = false;
    answers = false;
    tries = 0;
    const loadComponent = () => {
      tries++;
      return isAway ? Promise.reject(new TypeError('Failed to fetch')) : Promise.resolve(SomePage);
    };
    TestBed.configureTestingModule({
      providers: [
        provideZonelessChangeDetection(),
        provideRouter([
          { path: 'rules', title: 'Rules', loadComponent },
          { path: '**', component: SomePage },
        ]),
        {
          provide: ConnectionStore,
          useValue: {
            offline,
            ask: () => {
              offline.set(isAway && !answers);
              return Promise.resolve();
            },
          },
        },
      ],
    });
    TestBed.inject(WaitingPage);
    router = TestBed.inject(Router);
    await router.navigateByUrl('/desk');
  });

  const said = (): string[] =>
    TestBed.inject(ToastStore)
      .toasts()
      .map(({ text }) => text);
  const settled = (): Promise<unknown> => new Promise((resolve) => setTimeout(resolve, 5));
  const goToRules = async (): Promise<void> => {
    await router.navigateByUrl('/rules').catch(() => undefined);
    await settled();
    TestBed.tick();
  };
  const comeBack = async (): Promise<void> => {
    isAway = false;
    offline.set(false);
    TestBed.tick();
    await settled();
  };

  it('is said while the server is away, and opens when it is back', async () => {
    isAway = true;
    await goToRules();
    expect(router.url).toBe('/desk');
    expect(said()).toEqual(['\u201cRules\u201d cannot be loaded while the server is away. It opens once the server is back.']);
    await comeBack();
    expect(router.url).toBe('/rules');
    expect(said()).toEqual([]);
  });

  it('is forgotten when another is gone to', async () => {
    isAway = true;
    await goToRules();
    await router.navigateByUrl('/sites');
    expect(said()).toEqual([]);
    await comeBack();
    expect(router.url).toBe('/sites');
  });

  it('is not tried again and again where the server answers', async () => {
    isAway = true;
    answers = true;
    await goToRules();
    expect(said()).toEqual(['\u201cRules\u201d could not be loaded, though the server answers. Load this window anew.']);
    expect(tries).toBe(1);
  });
});

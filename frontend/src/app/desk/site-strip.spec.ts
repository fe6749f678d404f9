import { provideZonelessChangeDetection, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { type SiteStateNow } from '#shared/contract/site-state';
import { type Instant } from '#shared/time/instant';
import { ConnectionStore } from '../connection/connection-store';
import { deviceInstant, serverInstant } from '../instants/server-instant';
import { type LivePhase, LiveStore } from '../live/live-store';
import { DeskEvents } from './desk-events';
import { SiteStrip } from './site-strip';

const streaming: SiteStateNow = {
  siteId: 1,
  site: 'ORL',
  completeTo: null,
  completeSaidAtMs: null,
  lastEventAt: serverInstant('2026-12-02T09:59:52.000Z'),
  lastReceivedAtMs: 0,
  connectedAtMs: 1,
  setAsidesLastHour: 0,
  delayMs: 40,
  lastSigmaNs: 120,
  eventsLastMinute: 120,
};

describe('the strip of sites', () => {
  const phase = signal<LivePhase>('live');
  const since = signal<Instant | undefined>(undefined);
  let fixture: ComponentFixture<SiteStrip>;

  beforeEach(() => {
    vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval', 'Date'], now: new Date('2026-12-02T10:00:00Z') });
    phase.set('live');
    since.set(undefined);
    TestBed.configureTestingModule({
      providers: [
        provideZonelessChangeDetection(),
        { provide: LiveStore, useValue: { phase, sites: signal([streaming]) } },
        { provide: ConnectionStore, useValue: { offlineSince: since, offline: () => since() !== undefined } },
        { provide: DeskEvents, useValue: { sites: signal([{ id: 1, code: 'ORL', name: 'Orla' }]) } },
      ],
    });
    fixture = TestBed.createComponent(SiteStrip);
  });
  afterEach(() => {
    vi.useRealTimers();
  });

  const text = (): string => {
    TestBed.tick();
    return (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  };
  const mark = (): string | null | undefined => (fixture.nativeElement as HTMLElement).querySelector('svg')?.getAttribute('aria-label');

  it('says how a site streams, and lets the age of its last trigger grow though nothing comes', () => {
    expect(text()).toMatch(/2\.0\/s.*8\.0\ss ago.*delay/);
    expect(mark()).toBe('streaming');
    vi.advanceTimersByTime(3_000);
    expect(text()).toMatch(/11\.0\ss ago/);
  });

  it('says since when it is not known how a site streams while the server is away, and how old its last trigger is', () => {
    since.set(deviceInstant());
    vi.advanceTimersByTime(20_000);
    expect(text()).toMatch(/28\.0\ss ago.*not known since 10:00:00 UTC/);
    expect(text()).not.toMatch(/\/s|delay/);
    expect(mark()).toBe('not known');
    since.set(undefined);
    expect(text()).not.toContain('not known');
    expect(mark()).toBe('streaming');
  });

  it('does not claim to know where the server answers and its live connection is lost', () => {
    phase.set('offline');
    expect(text()).toContain('not known now');
    expect(mark()).toBe('not known');
  });
});

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { buildNetwork } from '#shared/contract/build-network';
import { parseNetworkFile } from '#shared/contract/network-file';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { earthRotation } from '#shared/earth/rotation';
import { type Outcome } from '#shared/outcome';
import { type Network } from '#shared/reconcile/network';
import {
  createReconciler,
  emptyRecord,
  KINDS,
  type ReconciledRecord,
  type RecordLayout,
  type SetAsideReason,
} from '#shared/reconcile/record';
import { type EventColumns } from '#shared/relativity/events';
import { timeVarianceNs2 } from '#shared/relativity/time-error';
import { taiMinusUtcOnDay, utcDayAt } from '#shared/time/leap-seconds';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';
import { root } from '../../scripts/lib.mjs';
import { eventColumns } from './events';

/** A folder of `examples/`, reconciled by the core alone. */
export interface Example {
  readonly network: Network;
  /** In the order of time. */
  readonly events: EventColumns;
  readonly names: readonly string[];
  readonly kinds: readonly string[];
  readonly setAside: readonly { readonly reason: SetAsideReason; readonly text: string }[];
  /** Lines that said again what an earlier one had said. */
  readonly repeated: number;
  /** Row of the event of a name. */
  readonly row: (name: string) => number;
}

/** A log of the folder, and its site where the log does not name it. */
export type ExampleLog = string | readonly [site: string, path: string];

const leapSeconds = shippedLeapSeconds();

function good<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(`${outcome.problem.where}: ${outcome.problem.text}`);
  return outcome.value;
}

function readNetwork(folder: string): Network {
  const file: unknown = JSON.parse(readFileSync(join(folder, 'network.json'), 'utf8'));
  return good(
    buildNetwork(good(parseNetworkFile(file)), {
      leapSeconds,
      rotationFor: ({ taiS }) => earthRotation(constantOrientation(-taiMinusUtcOnDay(leapSeconds, utcDayAt(leapSeconds, taiS)!.day)!)),
      earthBarycentricVelocityMS,
    }),
  );
}

function layoutOf(header: readonly string[], ofSite: string | undefined): RecordLayout {
  const at = (name: string): number => header.indexOf(name);
  return {
    width: header.length,
    site: at('site'),
    sequence: at('sequence'),
    series: at('series'),
    reading: at('reading'),
    sigma: at('sigma_ns'),
    amplitude: at('amplitude'),
    kind: at('kind'),
    ofSite,
  };
}

/** Reads an example and reconciles it, without the command. */
export function readExample(name: string, logs: readonly ExampleLog[]): Example {
  const folder = join(root, 'examples', name);
  const network = readNetwork(folder);
  const reconcile = createReconciler(network, leapSeconds);
  const setAside: { reason: SetAsideReason; text: string }[] = [];
  const accepted = new Map<string, { record: ReconciledRecord; texts: string[] }>();
  for (const log of logs) {
    const [ofSite, path] = typeof log === 'string' ? [undefined, log] : log;
    const [header = [], ...rows] = Papa.parse<string[]>(readFileSync(join(folder, path), 'utf8'), { skipEmptyLines: true }).data;
    for (const fields of rows) {
      const record = emptyRecord();
      const reason = reconcile(fields, layoutOf(header, ofSite), record);
      const text = fields.join(',');
      if (reason) {
        setAside.push({ reason, text });
        continue;
      }
      const parts = [network.sites[record.site]!.code, ...(record.series === '' ? [] : [record.series]), record.sequence];
      const known = accepted.get(parts.join(':'));
      if (known) known.texts.push(text);
      else accepted.set(parts.join(':'), { record, texts: [text] });
    }
  }
  for (const [identity, { texts }] of accepted) {
    if (new Set(texts).size === 1) continue;
    setAside.push(...texts.map((text) => ({ reason: 'conflict' as const, text })));
    accepted.delete(identity);
  }
  const sorted = [...accepted].toSorted(([, a], [, b]) => a.record.taiS - b.record.taiS || a.record.ps - b.record.ps);
  const events = eventColumns(
    sorted.map(([, { record }]) => ({ ...record, placeM: network.sites[record.site]!.worldline.placeAt(record) })),
  );
  for (let i = 0; i < events.count; i++) events.sigmaNs[i] = Math.sqrt(timeVarianceNs2(events, network.errors, i));
  const names = sorted.map(([identity]) => identity);
  return {
    network,
    events,
    names,
    kinds: sorted.map(([, { record }]) => KINDS[record.kind]!),
    setAside,
    repeated: sorted.reduce((sum, [, { texts }]) => sum + texts.length - 1, 0),
    row: (event) => {
      const row = names.indexOf(event);
      if (row < 0) throw new Error(`no event ${event}`);
      return row;
    },
  };
}

import { mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { newFolder } from '../support/folder';
import { startServer } from '../support/server';
import { type KeptFault, faultsOf } from './disk-kept';
import { type Cut, CUTS, Disk } from './power-cut-disk';
import { type Recorded, recordWriter } from './power-cut-recorded';
import { dice } from './records';

const LONG = process.env['LONG'] !== undefined;
const POINTS = LONG ? 300 : 40;
const PLANTED_POINTS = LONG ? 60 : 12;
/** Points at which the built server itself is started. */
const STARTED_POINTS = LONG ? 12 : 2;
/** Of each site: the log is written back several times meanwhile, and taken away at the end. */
const BATCHES = 60;
/** How many of the points lie before the first acknowledgement, while the tables are made. */
const EARLY_SHARE = 0.15;
const SEED = Number(process.env['SEED'] ?? 20260301);
const TEST_MS = LONG ? 1_800_000 : 300_000;

/** Points of a record: some while the database is made, the others from the first acknowledgement on, and the very end. */
function pointsOf({ calls, acknowledged }: Recorded, count: number, roll: () => number): readonly number[] {
  const begun = acknowledged[0]?.after ?? 0;
  const points = Array.from({ length: count - 1 }, (_, at) =>
    at < EARLY_SHARE * count ? Math.floor(roll() * begun) : begun + Math.floor(roll() * (calls.length - begun)),
  );
  return [...points, calls.length].sort((a, b) => a - b);
}

interface Image {
  readonly point: number;
  readonly cut: Cut;
  readonly dataDir: string;
  /** What had been acknowledged. */
  readonly acknowledged: readonly Recorded['acknowledged'][number]['what'][];
}

/** Puts each image on the disk, lets it be looked at, and takes it away. */
async function lookAtImages(
  { recorded, points, cuts, roll }: { recorded: Recorded; points: readonly number[]; cuts: readonly Cut[]; roll: () => number },
  look: (image: Image) => Promise<void>,
): Promise<number> {
  const { calls, acknowledged } = recorded;
  const disk = new Disk();
  const folder = newFolder('power-cut-images');
  let done = 0;
  let images = 0;
  for (const point of points) {
    for (; done < point; done++) disk.take(calls[done]!);
    for (const cut of cuts) {
      const dataDir = join(folder, String(images++));
      mkdirSync(dataDir, 0o700);
      for (const [name, content] of disk.after(cut, roll)) writeFileSync(join(dataDir, name), content);
      await look({ point, cut, dataDir, acknowledged: acknowledged.flatMap(({ after, what }) => (after <= point ? [what] : [])) });
      rmSync(dataDir, { recursive: true });
    }
  }
  return images;
}

describe('a power cut', () => {
  let recorded: Recorded;
  beforeAll(() => {
    recorded = recordWriter({ batches: BATCHES, seed: SEED });
  }, TEST_MS);

  it(
    'at any point loses nothing that was acknowledged, leaves a sound database, and the server starts over it',
    async () => {
      const roll = dice(SEED);
      const faults: string[] = [];
      const images = await lookAtImages({ recorded, points: pointsOf(recorded, POINTS, roll), cuts: CUTS, roll }, async (image) => {
        for (const { is, text } of await faultsOf(image.dataDir, image.acknowledged))
          faults.push(`SEED=${SEED}, ${image.cut} at call ${image.point} of ${recorded.calls.length}: ${is}: ${text}`);
      });
      expect(faults).toEqual([]);
      expect(images).toBe(POINTS * CUTS.length);
    },
    TEST_MS,
  );

  it(
    'is no hindrance to the built server',
    async () => {
      const roll = dice(SEED + 1);
      await lookAtImages({ recorded, points: pointsOf(recorded, STARTED_POINTS, roll), cuts: ['some'], roll }, async ({ dataDir }) => {
        const server = await startServer({ DATA_DIR: dataDir });
        expect((await fetch(`${server.url}api/health`)).status).toBe(200);
        expect((await server.stop()).code).toBe(0);
      });
    },
    TEST_MS,
  );

  it('is recorded with the log written back into the database at several points, and with acknowledgements in between', () => {
    const { calls, acknowledged } = recorded;
    const places = new Set(acknowledged.map(({ after }) => after));
    expect(places.size).toBeGreaterThan(BATCHES);
    const made = calls.find((call) => call.is === 'made' && call.name === 'skewline.sqlite');
    const file = made?.is === 'made' ? made.file : -1;
    const writtenBack = calls.filter((call, at) => call.is === 'synced' && call.file === file && at > (acknowledged[0]?.after ?? 0));
    expect(writtenBack.length).toBeGreaterThan(1);
  });
});

describe("the library's default, which leaves a commit unsynced,", () => {
  it(
    'is caught by what was synced and by parts of the rest',
    async () => {
      const recorded = recordWriter({ batches: BATCHES, seed: SEED, pragma: 'synchronous = NORMAL' });
      const roll = dice(SEED);
      const found: Record<Cut, KeptFault[]> = { everything: [], synced: [], some: [] };
      const points = pointsOf(recorded, PLANTED_POINTS, roll);
      await lookAtImages({ recorded, points, cuts: CUTS, roll }, async ({ cut, dataDir, acknowledged }) => {
        found[cut].push(...(await faultsOf(dataDir, acknowledged)));
      });
      expect(found.everything).toEqual([]); // what a killed process leaves tells the two apart by nothing
      for (const cut of ['synced', 'some'] as const) expect(found[cut].filter(({ is }) => is === 'lost').length, cut).toBeGreaterThan(0);
    },
    TEST_MS,
  );
});

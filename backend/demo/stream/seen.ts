import { C_M_S } from '#shared/constants';
import { planeWaveDelayS } from '#shared/relativity/plane-wave';
import { norm, subtract } from '#shared/relativity/vector';
import { addPicoseconds, type Instant } from '#shared/time/instant';
import { type Disturbance, type Front, type Pulse, type Unrelated } from './plan';
import { lightTimeS, type TrueSite, type World } from './world';

/** What a detector saw, at its true time. */
export interface Seen {
  readonly site: TrueSite;
  /** When it reached the detector. */
  readonly at: Instant;
  readonly cause: Front | Disturbance | Unrelated | Pulse;
  readonly amplitude: number;
}

const PULSE_AMPLITUDE = 50;
const ROUNDS = 3; // the Earth turns by 20 m while light crosses it, by 2 mm while light crosses those, and so on

const later = (instant: Instant, seconds: number): Instant => addPicoseconds(instant, Math.round(seconds * 1e12));

/**
 * When and where the triggers of a happening truly are.
 *
 * @param start of the slice
 * @returns one trigger for each site that sees it; a front's lie on one plane that moves at the speed of light, to the picosecond
 */
export function seenOf(world: World, start: Instant, cause: Front | Disturbance | Unrelated | Pulse): readonly Seen[] {
  const siteOf = (code: string): TrueSite => {
    const site = world.sites.get(code);
    if (!site) throw new Error(`the demo has no site ${code}`);
    return site;
  };
  switch (cause.kind) {
    case 'unrelated':
      return [{ site: siteOf(cause.site), at: later(start, cause.atS), cause, amplitude: cause.amplitude }];
    case 'front':
      return cause.seen.map(({ site: code, amplitude }) => {
        const site = siteOf(code);
        return { site, at: frontAt(site, later(start, cause.passesS), cause), cause, amplitude };
      });
    case 'disturbance': {
      const [from, to] = [siteOf(cause.from), siteOf(cause.to)];
      const at = later(start, cause.startsS);
      return [
        { site: from, at, cause, amplitude: cause.amplitude },
        { site: to, at: later(at, lightTimeS(from, to) / cause.speedC), cause, amplitude: cause.amplitude * 0.6 },
      ];
    }
    case 'pulse': {
      const { firstTaiS, periodS } = world.emitter;
      const emitted = { taiS: firstTaiS + cause.number * periodS, ps: 0 };
      return cause.sites.map((code) => {
        const site = siteOf(code);
        return { site, at: pulseAt(world, site, emitted), cause, amplitude: PULSE_AMPLITUDE };
      });
    }
  }
}

function frontAt({ worldline }: TrueSite, passes: Instant, { toSource }: Front): Instant {
  let at = passes;
  for (let round = 0; round < ROUNDS; round += 1) at = later(passes, planeWaveDelayS(toSource, worldline.placeAt(at)));
  return at;
}

function pulseAt({ emitterWorldline }: World, { worldline }: TrueSite, emitted: Instant): Instant {
  const from = emitterWorldline.placeAt(emitted);
  let at = emitted;
  for (let round = 0; round < ROUNDS; round += 1) at = later(emitted, norm(subtract(worldline.placeAt(at), from)) / C_M_S);
  return at;
}

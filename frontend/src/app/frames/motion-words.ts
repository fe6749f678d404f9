import { type Frame, type FrameMotionStated } from '#shared/contract/frame-routes';
import { type Words } from '../ui/meanwhile';

/** How a frame moves in its parent, as it was stated. */
export function motionWords(motion: FrameMotionStated | null, codeOf: (siteId: number) => string): string {
  switch (motion?.kind) {
    case undefined:
      return 'in a way that is not computed yet';
    case 'barycentric':
      return 'as the solar-system barycentre does';
    case 'toward-baseline':
      return `${speedWords(motion)} from ${codeOf(motion.fromSiteId)} toward ${codeOf(motion.toSiteId)}`;
    case 'velocity':
      if (motion.betaC) return `at (${motion.betaC.join(', ')}) c`;
      return `${speedWords(motion)} toward ${motion.toward?.raDeg}\u00b0 ${motion.toward?.decDeg}\u00b0 (ICRS)`;
  }
}

const speedWords = ({ speedC, speedKmS, rapidity }: { speedC?: number | undefined; speedKmS?: number | undefined; rapidity?: number | undefined }): string => {
  if (speedC !== undefined) return `at ${speedC} c`;
  return speedKmS === undefined ? `at rapidity ${rapidity}` : `at ${speedKmS} km/s`;
}; // prettier-ignore

/** What a frame says, word by word. */
export const frameWords = ({ name, pinned, now }: Frame, codeOf: (siteId: number) => string, frameOf: (id: number) => string): Words => ({
  Name: name,
  'In tables': pinned === null ? 'no' : `pinned ${pinned}`,
  'Moves in': now.parentId === null ? 'geocentric' : frameOf(now.parentId),
  Motion: motionWords(now.motion, codeOf),
});

import { type Clock } from '#shared/contract/clock-routes';
import { type Scale } from '#shared/time/scales';
import { instantText } from '../instants/instant-parts';
import { type Words } from '../ui/meanwhile';

/** What a clock record says, segment by segment. */
export function recordWords({ record }: Pick<Clock, 'record'>, scale: Scale): Words {
  return Object.fromEntries(
    record.map(({ segment, from, offsetNs, offsetSigmaNs, rateNsPerDay, rateSigmaNsPerDay }) => [
      `segment ${segment}`,
      `from ${instantText(from, scale, 0)}: ${offsetNs} \u00b1 ${offsetSigmaNs} ns, ${rateNsPerDay} \u00b1 ${rateSigmaNsPerDay} ns a day`,
    ]),
  );
}

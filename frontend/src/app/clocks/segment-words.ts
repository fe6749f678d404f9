import { type Clock } from '#shared/contract/clock-routes';
import { type Scale } from '#shared/time/scales';
import { instantText } from '../instants/instant-parts';
import { figureText } from '../ui/figure';
import { type Words } from '../ui/meanwhile';

/** What a clock record says, segment by segment. */
export function recordWords({ record }: Pick<Clock, 'record'>, scale: Scale): Words {
  return Object.fromEntries(
    record.map(({ segment, from, offsetNs, offsetSigmaNs, rateNsPerDay, rateSigmaNsPerDay }) => [
      `segment ${segment}`,
      `from ${instantText(from, scale, 0)}: ${figureText(offsetNs)} \u00b1 ${figureText(offsetSigmaNs)} ns, ${figureText(rateNsPerDay)} \u00b1 ${figureText(rateSigmaNsPerDay)} ns a day`,
    ]),
  );
}

import { type SitePosition } from '#shared/contract/site-routes';

const DECIMALS = 4; // 11 m: enough to know a place by

/** Where a site stands, in degrees north and east with a true minus; a platform has no place of its own. */
export function placeText(position: SitePosition | null): string {
  if (!position) return 'moves';
  const { latitudeDeg, longitudeDeg } = position.geodetic;
  return `${degrees(latitudeDeg)}\u00b0 ${degrees(longitudeDeg)}\u00b0`;
}

const degrees = (value: number): string => value.toFixed(DECIMALS).replace('-', '\u2212');

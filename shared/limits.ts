/** The limits of use, stated on screens and in reports. */
export const LIMITS: readonly string[] = [
  "Frames are those of special relativity: gravity's part in clock rates is corrected for platforms, but frames other than the geocentric one neglect gravitational time dilation (below 2e-8 of the time difference).",
  'Light-time is the vacuum chord: gravity adds up to about 0.1 ns between Earth sites, air about 8 ns on a zenith path from an emitter (both from memory).',
  'Without an Earth-orientation table all sites turn together by less than 14 arcseconds near the start of the run, and by about 15 more for each second that UT1 drifts over years; no interval feels it, but directions and the orders in fast frames do (up to 2.8 us times gamma and the speed in c, on an Earth diameter).',
  'A smeared or POSIX-counted clock is ambiguous at a leap second: its readings there are to be set aside.',
  "Not for navigation, aviation, or any safety-of-life timing; where such a use is regulated, the licensed authority's timing service rules.",
  'Sites stand on the Earth in this version; platforms that fly come later.',
];

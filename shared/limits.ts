/** The limits of use, stated on screens and in reports. */
export const LIMITS: readonly string[] = [
  "Frames are those of special relativity: gravity's part in clock rates is corrected for platforms, but frames other than the geocentric one neglect gravitational time dilation (below 2e-8 of the time difference).",
  'Light-time is the vacuum chord: gravity adds up to about 0.1 ns between Earth sites, air about 8 ns on a zenith path from an emitter.',
  'A smeared or POSIX-counted clock is ambiguous at a leap second: its readings there are to be set aside.',
  "Not for navigation, aviation, or any safety-of-life timing; where such a use is regulated, the licensed authority's timing service rules.",
];

/** Order of texts by code unit, as files and sites are sorted everywhere. */
export const compareText = (a: string, b: string): number => (a < b ? -1 : a > b ? 1 : 0);

/** Modified Julian Date of 1970-01-01, and the length of its day, ms. */
const MJD_OF_1970 = 40_587;
const DAY_MS = 86_400_000;

/**
 * An Earth-orientation table in the columns of the IERS's readme.finals2000A, with invented numbers of the usual size.
 *
 * @param first the first day (UTC), as YYYY-MM-DD
 * @param measured days with measured values
 * @param predicted days after them that are predictions
 */
export function finalsFile(first: string, measured: number, predicted: number): string {
  const lines = Array.from({ length: measured + predicted }, (_, at) => {
    const dayMs = Date.parse(first) + at * DAY_MS;
    const [year = '', month = '', day = ''] = new Date(dayMs).toISOString().slice(2, 10).split('-');
    const flag = at < measured ? 'I' : 'P';
    return (
      `${year}${month}${day} ${MJD_OF_1970 + dayMs / DAY_MS}.00 ` +
      `${flag}  0.082507 0.000031  0.273404 0.000030  ${flag}-0.1886112 0.0000052`
    );
  });
  return `${lines.join('\n')}\n`;
}

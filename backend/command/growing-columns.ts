type Column = Float64Array | Int32Array | Uint32Array | Uint16Array | Uint8Array;

const FIRST_ROWS = 1024;
/** Rows are added by this share, so that little room stands empty. */
const GROWTH = 1.4;

/** Columns that grow together, for counts that are known only at the end; no object is kept a row. */
export class GrowingColumns<T extends Record<string, Column>> {
  count = 0;
  columns: T;
  private capacity = FIRST_ROWS;

  constructor(private readonly make: (rows: number) => T) {
    this.columns = make(FIRST_ROWS);
  }

  /** Makes room for one more row and returns its number. */
  add(): number {
    if (this.count === this.capacity) this.resize(Math.ceil(this.capacity * GROWTH));
    return this.count++;
  }

  /** Makes room for at least so many rows. */
  reserve(rows: number): void {
    if (rows > this.capacity) this.resize(rows);
  }

  private resize(rows: number): void {
    this.capacity = rows;
    const larger = this.make(this.capacity);
    for (const name of Object.keys(larger)) larger[name]?.set(this.columns[name] ?? []);
    this.columns = larger;
  }
}

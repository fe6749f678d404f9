import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { keepFile } from '../keep-file';

/** The last audit row that was written: kept outside the database, a cut tail or a rewritten chain does not fit it. */
export interface Head {
  readonly seq: number;
  readonly hashHex: string;
}

/** Where the head is kept. */
export interface AuditHead {
  /** The head that was kept last; undefined where none was, or where the file is none. */
  readonly read: () => Head | undefined;
  readonly keep: (head: Head) => void;
}

/** The head in its file in the data folder, one line: number and hash. It is replaced whole, and belongs to its owner alone. */
export function auditHeadIn(dataDir: string): AuditHead {
  const file = join(dataDir, 'audit-head');
  return {
    read: () => {
      if (!existsSync(file)) return undefined;
      const found = /^(\d{1,15}) ([0-9a-f]{64})\n$/.exec(readFileSync(file, 'utf8'));
      return found?.[1] && found[2] ? { seq: Number(found[1]), hashHex: found[2] } : undefined;
    },
    keep: ({ seq, hashHex }) => keepFile(file, `${seq} ${hashHex}\n`),
  };
}

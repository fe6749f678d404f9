import { createReadStream } from 'node:fs';
import Papa from 'papaparse';

/** The baseline of the command: papaparse alone streams the logs with `step`, and does nothing with the rows. */
const [shape = 'lists', ...paths] = process.argv.slice(2);
let rows = 0;
for (const path of paths) {
  await new Promise<void>((resolve, reject) => {
    Papa.parse(createReadStream(path, 'utf8'), {
      header: shape === 'objects',
      step: () => rows++,
      complete: () => resolve(),
      error: reject,
    });
  });
}
console.log(rows);

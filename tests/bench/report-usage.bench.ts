import { writeFileSync } from 'node:fs';

/** Loaded before a measured program: writes what the process took when it ends. */
process.on('exit', () => {
  const file = process.env['USAGE_FILE'];
  if (file !== undefined) writeFileSync(file, JSON.stringify(process.resourceUsage()));
});

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as z from 'zod';
import { root } from './paths';

/** The version of this program, from package.json. */
export const VERSION = z.object({ version: z.string() }).parse(JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'))).version;

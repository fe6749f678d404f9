import { hash, parseOptions, verify, type Options } from '@node-rs/argon2';
import { later } from '../api/refusal';
import { normalPassword } from '#shared/contract/people';

/** Argon2id at the least that OWASP's Password Storage Cheat Sheet names (2025; from memory): 19 MiB, two passes, one lane. */
const MEMORY_KIB = 19_456;
const PASSES = 2;
const LANES = 1;

const MOST_AT_ONCE = 2; // of 19 MiB and 20 ms each
const RETRY_S = 1;

/** The algorithm is the package's default, Argon2id; the database holds no other. */
const OPTIONS: Options = { memoryCost: MEMORY_KIB, timeCost: PASSES, parallelism: LANES };

/** Hashes passwords, two at once at most: more at a time are refused with 503, since each costs memory and a processor. */
export interface PasswordHasher {
  /** A new hash in the PHC string format. */
  readonly hash: (password: string) => Promise<string>;
  /** Whether it is the password; without a stored hash the same work is done for nothing, so that it lasts alike. */
  readonly matches: (stored: string | null, password: string) => Promise<boolean>;
}

/** Makes a hasher; its own hash of a random password stands in for those of accounts that do not exist. */
export async function passwordHasher(nobodysPassword: string): Promise<PasswordHasher> {
  const nobodys = await hash(nobodysPassword, OPTIONS);
  let running = 0;
  const oneOfFew = async <T>(work: () => Promise<T>): Promise<T> => {
    if (running >= MOST_AT_ONCE) throw later(503, 'Busy', 'Too many passwords are being checked: try again in a second.', RETRY_S);
    running += 1;
    try {
      return await work();
    } finally {
      running -= 1;
    }
  };
  return {
    hash: (password) => oneOfFew(() => hash(normalPassword(password), OPTIONS)),
    matches: (stored, password) =>
      oneOfFew(async () => {
        const isIt = await verify(stored ?? nobodys, normalPassword(password));
        return isIt && stored !== null;
      }),
  };
}

/** Whether a hash was made with less than is asked for today, so that the next sign-in makes a new one. */
export function isWeak(stored: string): boolean {
  const { memoryCost, timeCost } = parseOptions(stored);
  return memoryCost < MEMORY_KIB || timeCost < PASSES;
}

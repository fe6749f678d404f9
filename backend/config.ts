import { resolve } from 'node:path';
import * as z from 'zod';
import { problemOf, valueOf, type Outcome } from '#shared/outcome';
import { root } from './paths';

const MOST_PORT = 65_535;
const MOST_HOST_CHARACTERS = 253; // of a host name, RFC 1035
const MOST_PATH_CHARACTERS = 4_096; // PATH_MAX of Linux
const LOG_LEVELS = ['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent'] as const;
const MODES = ['development', 'production', 'test'] as const;

const textThat = (isRight: (text: string) => boolean, whatIsRight: string) => z.string().refine(isRight, whatIsRight);
const oneOf = <const T extends readonly string[]>(words: T) => z.enum(words, { error: `one of ${words.join(', ')}` });

/** Each variable of the environment that Skewline reads; one that is absent or empty takes its default. Faults say what is right. */
const environment = z.object({
  /**
   * PORT: the TCP port on which the server listens.
   * Unit: none. Default: 4210. Limit: a whole number from 0 to 65535; 0 takes any free port, which the printed URL then names.
   */
  PORT: textThat(
    (text) => /^\d{1,5}$/.test(text) && Number(text) <= MOST_PORT,
    `a whole number from 0 to ${MOST_PORT}, where 0 takes any free port`,
  )
    .default('4210')
    .transform(Number),

  /**
   * HOST: the address or name of this machine on which the server listens. The default is reached from this machine alone; 0.0.0.0 or ::
   * opens the server to the network, and then one that ends TLS belongs in front of it.
   * Unit: none. Default: 127.0.0.1. Limit: an IPv4 or IPv6 address (no brackets) or a host name, at most 253 characters.
   */
  HOST: textThat(
    (text) => /^[A-Za-z0-9.:_-]+$/.test(text) && text.length <= MOST_HOST_CHARACTERS,
    'an address or name of this machine, such as 127.0.0.1 or ::1',
  ).default('127.0.0.1'),

  /**
   * DATA_DIR: the folder of the database, and of whatever else must outlive the server. It is made when it is absent, open to its owner
   * alone. One server at a time may use it.
   * Unit: a path, absolute or from the folder of package.json. Default: data. Limit: at most 4,096 characters.
   */
  DATA_DIR: textThat(
    (text) => !text.includes('\0') && text.length <= MOST_PATH_CHARACTERS,
    `the path of a folder, at most ${MOST_PATH_CHARACTERS} characters`,
  )
    .default('data')
    .transform((path) => resolve(root, path)),

  /**
   * LOG_LEVEL: the least grave kind of line that is written to stderr, one JSON object a line. Requests that succeed are told at debug,
   * refused ones at info, failed ones at error.
   * Unit: none. Default: warn. Limit: fatal, error, warn, info, debug, trace or silent.
   */
  LOG_LEVEL: oneOf(LOG_LEVELS).default('warn'),

  /**
   * NODE_ENV: what the server is used for. In production it tells browsers to come by https alone (HSTS, for one year), so a server that
   * ends TLS must stand in front of it.
   * Unit: none. Default: development. Limit: development, production or test.
   */
  NODE_ENV: oneOf(MODES).default('development'),
});

export interface Config {
  readonly port: number;
  readonly host: string;
  readonly dataDir: string;
  readonly logLevel: (typeof LOG_LEVELS)[number];
  readonly production: boolean;
}

/**
 * Reads the configuration.
 *
 * @param env the environment's variables, such as process.env
 * @returns the configuration, or the problem of the first variable that cannot be used: its name, its value and what would be right
 */
export function readConfig(env: Readonly<Record<string, string | undefined>>): Outcome<Config> {
  const given = Object.fromEntries(Object.entries(env).filter(([, text]) => text !== ''));
  const { data, error } = environment.safeParse(given);
  if (data)
    return valueOf({
      port: data.PORT,
      host: data.HOST,
      dataDir: data.DATA_DIR,
      logLevel: data.LOG_LEVEL,
      production: data.NODE_ENV === 'production',
    });
  const first = error.issues[0];
  const name = String(first?.path[0]);
  return problemOf('configuration', name, `${name}=${JSON.stringify(env[name])} cannot be used: it must be ${first?.message ?? 'absent'}.`);
}

import { Command, CommanderError, InvalidArgumentError } from 'commander';
import { faultText } from './command/fault-text';
import { type FeedOptions } from './command/feed-command';
import { reconcileFiles } from './command/reconcile-command';
import { terminalProgress } from './command/progress';
import { UsageProblem } from './command/usage-problem';
import { VERSION } from './version';

/** Exit status: unusable arguments or files, and everything else that went wrong. */
const UNUSABLE = 2;
const FAILED = 1;

const DEFAULT_LIMIT = 10_000;

/** One line on stderr, whatever a fault's text holds. */
const say = (line: string): void => void process.stderr.write(`${line.trim().replaceAll(/\s*[\r\n]+\s*/g, ' ')}\n`);

// Whoever read the words has gone; the work and its exit status are as before.
for (const stream of [process.stdout, process.stderr]) stream.on('error', () => undefined);

/**
 * An abort signal that Ctrl-C, SIGTERM and the end of the terminal set off; its reason says what then became of the work.
 *
 * They are listened to until the process ends: Ctrl-C comes twice from a terminal in which npm hands it on, and the second may not end what the
 * first makes the command take away.
 */
function stopSignal(outcome: string): AbortSignal {
  const controller = new AbortController();
  for (const name of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const)
    process.on(name, () => controller.abort(new Error(`stopped by ${name}; ${outcome}`)));
  return controller.signal;
}

function limitOf(text: string): number {
  const value = Number(text);
  if (!/^\d+$/.test(text) || !Number.isSafeInteger(value) || value < 1)
    throw new InvalidArgumentError('It must be a whole number, at least 1.');
  return value;
}

interface ReconcileFlags {
  network: string;
  out: string;
  live?: string;
  leapSeconds?: string;
  earthOrientation?: string;
  limit: number;
}

function program(): Command {
  const skewline = new Command('skewline')
    .description(
      'Reconciles the trigger logs of a distributed detector network: one time, chosen inertial frames, coincidences, and the causal order of every pair.',
    )
    .version(VERSION)
    .configureOutput({
      outputError: (text) => say(`skewline: ${text.replace(/^error: /, '')}`),
    })
    .exitOverride();
  skewline
    .command('reconcile')
    .summary('from log files to events, coincidences, pairs and orders')
    .description(
      'Reads a network file and the trigger logs of its sites, and writes events, coincidences, pairs, orders in frames, neighbours, crowded events, what was set aside and a summary to a folder. The files are described in examples/FORMATS.md.',
    )
    .argument('<log...>', 'CSV logs; ORL=path.csv for a log without a site column')
    .requiredOption('--network <file>', 'the network: sites, clocks, frames, rule (JSON)')
    .requiredOption('--out <folder>', 'where the results go; each file appears whole or not at all')
    .option('--live <file>', 'spans in which sites could trigger (CSV: site,from,to)')
    .option('--leap-seconds <file>', 'an IERS leap-seconds.list (default: the one shipped)')
    .option('--earth-orientation <file>', 'an IERS finals2000A file (default: UT1 constant over the run, pole 0)')
    .option('--limit <n>', 'an event that is the earliest of more sets than this is listed as crowded', limitOf, DEFAULT_LIMIT)
    .addHelpText(
      'after',
      `
Example:
  npx skewline reconcile --network network.json --out results ORL.csv VES=vestmark.csv

Exit status: 0 done (records set aside are counted on stderr), 2 unusable arguments or network file, 1 anything else.`,
    )
    .action(async (logs: string[], flags: ReconcileFlags) => {
      await reconcileFiles(
        { ...flags, logs },
        { signal: stopSignal('nothing was written'), progress: terminalProgress(process.stderr), say },
      );
    });
  skewline
    .command('feed')
    .summary("stream a site's log to a server")
    .description(
      "Streams a log, as the site whose key is given, until each record is known to be in the server's database: through lost links and restarts of the server, without losing or doubling one. The columns are those of `reconcile`; the site column may be absent. What is malformed is sent too, and set aside by the server.",
    )
    .argument('<log>', 'CSV log; - for standard input')
    .requiredOption('--server <url>', "the server's address, such as http://127.0.0.1:4210")
    .option('--key-file <file>', "the site's key (default: the variable SKEWLINE_SITE_KEY)")
    .option('--follow', 'go on with what is added to the file, until Ctrl-C', false)
    .option('--complete', 'say at the end of the log that the site has sent all it has up to its latest reading', false)
    .option('--resume', 'leave out the numbers that the server holds: faster, but a record that was changed since is not noticed', false)
    .addHelpText(
      'after',
      `
Example:
  npx skewline feed --server http://127.0.0.1:4210 --key-file ORL.key --follow ORL.csv

Exit status: 0 every record is answered (those set aside are counted on stderr), 2 unusable arguments, log or key, 1 anything else.`,
    )
    .action(async (log: string, flags: Omit<FeedOptions, 'log'>) => {
      const { feed } = await import('./command/feed-command');
      const signal = stopSignal('what had no answer is to be fed again');
      await feed({ ...flags, log }, { env: process.env, input: process.stdin, signal, progress: terminalProgress(process.stderr), say });
    });
  skewline
    .command('verify')
    .summary('compute a certificate again, without a server')
    .description(
      'Computes every number of a certificate again from the verbatim readings in it, checks its hashes, its signatures and each claim, and prints what agrees and what does not. It needs nothing but the file, and writes nothing.',
    )
    .argument('<certificate>', 'the file, as a candidate gives it')
    .addHelpText('after', '\nExit status: 0 all of it holds, 1 some of it does not, 2 no certificate can be read there.')
    .action(async (path: string) => {
      const { verifyFile } = await import('./command/verify-command');
      verifyFile(path, (line) => void process.stdout.write(`${line}\n`));
    });
  skewline
    .command('user')
    .summary('people of a deployment')
    .command('add')
    .summary('let the first coordinator in')
    .description(
      "Prints the link at which the first coordinator of a deployment chooses a password: good for 72 hours, and once. It reads the server's variables (DATA_DIR, PUBLIC_ORIGIN), and the server may run meanwhile. They invite everyone else.",
    )
    .requiredOption('--email <address>', 'with which they will sign in')
    .requiredOption('--name <name>', 'how others see them')
    .action(async (person: Record<string, string>) => {
      process.umask(0o077); // whatever is written is the owner's alone
      // Only here: reconciling needs no database, and should not wait for its libraries.
      const { addUser } = await import('./command/user-add');
      addUser(person, process.env, (line) => void process.stdout.write(`${line}\n`));
    });
  skewline
    .command('audit')
    .summary('the audit trail of a deployment')
    .command('verify')
    .summary('check that it is what was written')
    .description(
      'Checks the whole audit trail in DATA_DIR against its hashes and the file audit-head: an entry that was altered, taken out, put in or moved, and a cut end, are named. It only reads, and the server may run meanwhile. Exit status: 0 sound, 1 not, 2 no database to read.',
    )
    .action(async () => {
      process.umask(0o077); // SQLite may make files beside the database
      const { verifyTrail } = await import('./command/audit-verify');
      verifyTrail(process.env, (line) => void process.stdout.write(`${line}\n`));
    });
  return skewline;
}

/** Runs the command line and answers the exit status. */
async function run(args: readonly string[]): Promise<number> {
  if (args.length === 0) {
    say('skewline: no command is given; name one, such as reconcile (skewline --help tells more)');
    return UNUSABLE;
  }
  try {
    await program().parseAsync(args, { from: 'user' });
    return 0;
  } catch (fault) {
    if (fault instanceof CommanderError) return fault.exitCode === 0 ? 0 : UNUSABLE;
    say(`skewline: ${faultText(fault)}`);
    return fault instanceof UsageProblem ? UNUSABLE : FAILED;
  }
}

process.exitCode = await run(process.argv.slice(2));

import { runFeed } from './demo/feed/run-feed';

// The process that streams the demo's sites; begun by the server, which it does not outlive: its standard input ends with it, however that ends.
process.umask(0o077);
const [url = '', dataDir = ''] = process.argv.slice(2);
const ending = new AbortController();
const end = (): void => ending.abort();
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, end);
process.stdin.on('end', end).on('error', end).resume();
await runFeed({ url, dataDir, signal: ending.signal, say: (line) => process.stderr.write(`skewline: ${line}\n`) });
process.exit(0);

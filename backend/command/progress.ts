import { type Options, SingleBar } from 'cli-progress';

/** Shows how far a command has come; says nothing where nobody watches. */
export interface Progress {
  /** Begins a stretch of work of `total` steps. */
  readonly begin: (what: string, total: number) => void;
  /** So many steps of the stretch are done. */
  readonly at: (done: number) => void;
  readonly end: () => void;
}

const UPDATES_PER_S = 4;

/** Whole numbers with a blank between groups of three digits. */
export const grouped = (value: number): string =>
  Math.round(value)
    .toString()
    .replace(/\B(?=(?:\d{3})+$)/g, ' ');

const secondsText = (seconds: number): string => (seconds < 90 ? `${Math.ceil(seconds)} s` : `${Math.ceil(seconds / 60)} min`);

function line(
  options: Options,
  params: { value: number; total: number; startTime: number; progress: number },
  payload: { what: string },
): string {
  const width = 24;
  const filled = Math.round(params.progress * width);
  const elapsedS = Math.max((Date.now() - params.startTime) / 1000, 1e-3);
  const rate = params.value / elapsedS;
  const left = rate > 0 ? secondsText((params.total - params.value) / rate) : 'some time';
  const bar = '#'.repeat(filled) + '-'.repeat(width - filled);
  return `${payload.what.padEnd(22)} [${bar}] ${grouped(params.value)} of ${grouped(params.total)}, ${grouped(rate)} a second, ${left} left`;
}

/** Progress on a terminal at stderr, or silence elsewhere. */
export function terminalProgress(stream: NodeJS.WriteStream): Progress {
  if (!stream.isTTY) return { begin: () => undefined, at: () => undefined, end: () => undefined };
  let bar: SingleBar | undefined;
  const end = (): void => {
    bar?.stop();
    bar = undefined;
  };
  return {
    begin: (what, total) => {
      end();
      bar = new SingleBar({ stream, fps: UPDATES_PER_S, clearOnComplete: true, hideCursor: false, format: line });
      bar.start(Math.max(total, 1), 0, { what });
    },
    at: (done) => bar?.update(done),
    end,
  };
}

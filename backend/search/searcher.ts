import { Worker } from 'node:worker_threads';
import { later, Refusal } from '../api/refusal';
import { workerFile } from '../paths';
import { type Search } from './run-search';

/** Searches at a time: each has a thread of its own. */
const MOST_SEARCHES = 2;
/** What a search may take. */
const MOST_SEARCH_MS = 5_000;
/** When a thread that has not answered is given up: it looks at the time at every row, so this is never. */
const GIVE_UP_MS = 2 * MOST_SEARCH_MS;
const RETRY_AFTER_S = 1;

/** What a search thread is asked, and what it answers. */
export interface SearchAsked {
  readonly search: Search;
  readonly limitMs: number;
}
export type SearchAnswer =
  { readonly kind: 'rows'; readonly rows: unknown[] } | { readonly kind: 'late' } | { readonly kind: 'failed'; readonly text: string };

/** Heavy searches in threads of their own, a few at a time, each with a time limit. */
export interface Searcher {
  /**
   * Runs a search, or refuses it.
   *
   * @returns rows as the walk's columns name them
   * @throws Refusal 503 with Retry-After while as many run as may, 503 where it takes longer than it may
   */
  readonly run: <Row>(search: Search) => Promise<Row[]>;
  readonly close: () => Promise<void>;
}

/** How many searches may run, and how long: smaller in tests. */
export interface SearchLimits {
  readonly most?: number;
  readonly limitMs?: number;
}

/**
 * Makes the searcher; a thread starts with the first search that needs it and is kept.
 *
 * @param file of the database
 */
export function makeSearcher(file: string, { most = MOST_SEARCHES, limitMs = MOST_SEARCH_MS }: SearchLimits = {}): Searcher {
  const idle: Worker[] = [];
  const all = new Set<Worker>();
  let running = 0;
  const start = (): Worker => {
    const worker = new Worker(workerFile('search'), { workerData: file });
    worker.unref();
    all.add(worker);
    worker.once('exit', () => {
      all.delete(worker);
      const at = idle.indexOf(worker);
      if (at >= 0) idle.splice(at, 1);
    });
    return worker;
  };
  return {
    run: async <Row>(search: Search) => {
      if (running >= most)
        throw later(503, 'Busy', `${most} searches through many rows are running: try again in a second.`, RETRY_AFTER_S);
      running += 1;
      const worker = idle.pop() ?? start();
      try {
        const answer = await ask(worker, { search, limitMs });
        idle.push(worker);
        if (answer.kind === 'late') throw tooSlow(limitMs);
        if (answer.kind === 'failed') throw new Error(answer.text);
        return answer.rows as Row[]; // the columns are those that the caller wrote
      } finally {
        running -= 1;
      }
    },
    close: async () => {
      await Promise.all([...all].map((worker) => worker.terminate()));
    },
  };
}

const tooSlow = (limitMs: number): Refusal =>
  new Refusal(503, 'Took too long', `The search took longer than ${limitMs / 1000} s: keep it to a shorter span, or take a filter away.`);

function ask(worker: Worker, asked: SearchAsked): Promise<SearchAnswer> {
  return new Promise((resolve, reject) => {
    const end = (settle: () => void) => () => {
      clearTimeout(timer);
      worker.removeAllListeners('message').off('exit', onExit).off('error', onError);
      settle();
    };
    const onExit = end(() => {
      reject(new Error('a search thread ended'));
    });
    const onError = (fault: unknown): void => {
      end(() => {
        reject(fault instanceof Error ? fault : new Error(String(fault)));
      })();
    };
    const timer = setTimeout(() => void worker.terminate(), GIVE_UP_MS);
    worker.once('message', (answer: SearchAnswer) => {
      end(() => {
        resolve(answer);
      })();
    });
    worker.once('exit', onExit).once('error', onError);
    worker.postMessage(asked);
  });
}

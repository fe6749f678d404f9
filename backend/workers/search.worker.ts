import { parentPort, workerData } from 'node:worker_threads';
import { openForSearch, OutOfTime } from '../search/run-search';
import { type SearchAnswer, type SearchAsked } from '../search/searcher';

// A thread for searches: a shell around `run-search.ts`.
const connection = openForSearch(String(workerData));
const port = parentPort;

function answerTo({ search, limitMs }: SearchAsked): SearchAnswer {
  try {
    return { kind: 'rows', rows: connection.run(search, limitMs) };
  } catch (fault) {
    if (fault instanceof OutOfTime) return { kind: 'late' };
    return { kind: 'failed', text: fault instanceof Error ? (fault.stack ?? fault.message) : String(fault) };
  }
}

port?.on('message', (asked: SearchAsked) => {
  port.postMessage(answerTo(asked));
});

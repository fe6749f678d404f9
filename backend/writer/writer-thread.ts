import { Worker } from 'node:worker_threads';
import { problemOf, valueOf, type Outcome } from '#shared/outcome';
import { workerFile } from '../paths';
import { type Facts, type WriterSources } from './begin-writer';
import { type FromWriter, type ToWriter } from './messages';
import { newsDesk } from './news-desk';
import { QuestionFailed, type Writer } from './questions';

/** What the writer thread is started with; its log and its clock are its own. */
export type ThreadSources = Omit<WriterSources, 'log' | 'nowMs'>;

interface Waiting {
  readonly resolve: (answer: never) => void;
  readonly reject: (fault: Error) => void;
}

/** A writer in a thread of its own, and what the HTTP thread must know of it. */
export interface WriterThread {
  readonly writer: Writer;
  readonly facts: Facts;
}

/** The writer thread did not begin, and nobody foresaw why; its message is one line. */
export class WriterFailed extends Error {}

/**
 * Starts the writer thread and waits until it is ready.
 *
 * @param sources what it is started with
 * @param broken is called when it ends by itself once it is ready: at once the process must end too, and no question is answered any more
 * @returns the writer, or the problem of a database or secret that cannot be used
 * @throws WriterFailed for any other reason why it did not begin
 */
export function startWriterThread(sources: ThreadSources, broken: (fault: unknown) => void): Promise<Outcome<WriterThread>> {
  const worker = new Worker(workerFile('writer'), { workerData: sources });
  const { tell, on } = newsDesk();
  const waiting = new Map<number, Waiting>();
  let lastId = 0;
  let closed: (() => void) | undefined;
  const send = (message: ToWriter, transfer: readonly ArrayBuffer[] = []): void => worker.postMessage(message, transfer);
  const writer: Writer = {
    on,
    ask: (kind, body, transfer) =>
      new Promise((resolve, reject) => {
        if (closed) throw new QuestionFailed('the writer is closing');
        lastId += 1;
        waiting.set(lastId, { resolve, reject });
        // The compiler does not see that a kind and its own body make one of the messages.
        send({ is: 'question', id: lastId, kind, body } as ToWriter, transfer);
      }),
    close: () =>
      new Promise((resolve) => {
        closed = resolve;
        send({ is: 'close' });
      }),
  };
  return new Promise((resolve, reject) => {
    let begun = false;
    const end = (fault: unknown): void => {
      if (!begun) reject(new WriterFailed(fault instanceof Error ? fault.message : 'the writer thread ended'));
      else if (closed === undefined || fault !== undefined) broken(fault);
    };
    worker.on('error', end);
    worker.on('messageerror', end);
    worker.on('exit', () => end(undefined));
    worker.on('message', (said: readonly FromWriter[]) => said.forEach(hear));
    function hear(message: FromWriter): void {
      switch (message.is) {
        case 'ready':
          begun = true;
          resolve(valueOf({ writer, facts: message.facts }));
          return;
        case 'refused':
          resolve(problemOf('writer', '', message.text));
          return;
        case 'failed':
          reject(new WriterFailed(message.text));
          return;
        case 'answer':
          settle(message.id)?.resolve(message.answer as never);
          return;
        case 'unanswered':
          settle(message.id)?.reject(new QuestionFailed(message.text));
          return;
        case 'news':
          if (message.kind === 'changed') tell('changed', message.news);
          else tell('revoked', message.news);
          return;
        case 'closed':
          closed?.();
      }
    }
  });

  function settle(id: number): Waiting | undefined {
    const one = waiting.get(id);
    waiting.delete(id);
    return one;
  }
}

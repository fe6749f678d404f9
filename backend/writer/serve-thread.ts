import { type MessagePort } from 'node:worker_threads';
import { pino } from 'pino';
import { faultText } from '../command/fault-text';
import { serverLog } from '../server-log';
import { beginWriter, type BegunWriter } from './begin-writer';
import { type FromWriter, type ToWriter } from './messages';
import { QuestionFailed, type QuestionKind, type Questions } from './questions';
import { type ThreadSources } from './writer-thread';

/**
 * Runs the writer at its end of the port: begins it, says so, and answers questions until it is told to close. What nobody foresaw is thrown
 * out of the thread, whose end ends the process.
 *
 * @param port to the HTTP thread
 * @param sources what the HTTP thread starts it with
 */
export async function serveThread(port: MessagePort, sources: ThreadSources): Promise<void> {
  const send = togetherTo(port);
  const log = serverLog(sources.config.logLevel, pino.destination({ dest: 2, sync: true }));
  // Here, since an error of the database loses its words between threads.
  process.on('uncaughtExceptionMonitor', (fault) => log.fatal({ err: fault }, 'the writer failed'));
  const begun = await beginWriter({ ...sources, log, nowMs: Date.now }, (kind, news) =>
    send({ is: 'news', kind, news } as FromWriter),
  ).catch((fault: unknown) => {
    log.debug({ err: fault }, 'the writer did not begin');
    send({ is: 'failed', text: faultText(fault) });
  });
  if (!begun) return;
  if (!begun.ok) {
    send({ is: 'refused', text: begun.problem.text });
    return;
  }
  const writer = begun.value;
  port.on('message', (message: ToWriter) => {
    if (message.is === 'close') void close(writer);
    else void answer(writer, message.id, message.kind, message.body);
  });
  const { deploymentId, signingKey, keepsMails } = writer.ground;
  send({ is: 'ready', facts: { deploymentId, signingKey, keepsMails } });

  async function answer<K extends QuestionKind>({ answer }: BegunWriter, id: number, kind: K, body: Questions[K]['body']): Promise<void> {
    try {
      send({ is: 'answer', id, answer: await answer(kind, body) });
    } catch (fault) {
      if (!(fault instanceof QuestionFailed)) throw fault;
      send({ is: 'unanswered', id, text: fault.message });
    }
  }

  async function close(closing: BegunWriter): Promise<void> {
    await closing.close();
    send({ is: 'closed' });
    send.now();
    port.close();
  }
}

/**
 * Sends what is said in one turn as one message: the news of a commit, and the answers of all that it holds. To wake the other thread for each
 * would cost more than to say it.
 */
function togetherTo(port: MessagePort) {
  let said: FromWriter[] = [];
  const now = (): void => {
    if (said.length > 0) port.postMessage(said);
    said = [];
  };
  const send = (message: FromWriter): void => {
    // A tick that a microtask asks for comes after all microtasks of the turn, in which answers come about.
    if (said.push(message) === 1) queueMicrotask(() => process.nextTick(now));
  };
  return Object.assign(send, { now });
}

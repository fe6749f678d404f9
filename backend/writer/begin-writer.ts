import { setTimeout as sleep } from 'node:timers/promises';
import { problemOf, valueOf, type Outcome } from '#shared/outcome';
import { checkTrailAtStart } from '../audit/check-trail';
import { watchSnapshots } from '../candidates/snapshot-watch';
import { closeDb, openDb, UnusableDatabase, type Db } from '../db';
import { seedDemo } from '../demo/seed';
import { type Ground } from '../ground';
import { makeGround, type Sources } from '../make-ground';
import { makeAnswers } from './answers';
import { type Committed } from './commit';
import { isLostWrite } from './lost-write';
import { openStream } from './stream';
import { QuestionFailed, type News, type QuestionKind, type Questions } from './questions';

const LEAVE_MS = 1_000; // what mails on their way may take at the end

export type WriterSources = Omit<Sources, 'db'>;

/** What the HTTP thread must know before it can answer. */
export type Facts = Pick<Ground, 'deploymentId' | 'signingKey' | 'keepsMails'>;

export type TellNews = <K extends keyof News>(kind: K, news: News[K]) => void;

/** A writer that has begun, in whatever thread. */
export interface BegunWriter {
  readonly ground: Ground;
  readonly answer: <K extends QuestionKind>(kind: K, body: Questions[K]['body']) => Promise<Questions[K]['answer']>;
  readonly close: () => Promise<void>;
}

/**
 * Begins the writer: opens the one writing connection, brings the tables up to date, and makes what answers.
 *
 * @param sources what the ground is made from
 * @param tell takes the news, each after its commit
 * @returns the writer, or the problem of a database or secret that cannot be used
 */
export async function beginWriter(sources: WriterSources, tell: TellNews): Promise<Outcome<BegunWriter>> {
  const opened = openOrProblem(sources.config.dataDir);
  if (!opened.ok) return opened;
  const db = opened.value;
  const made = await makeGround({ ...sources, db });
  if (!made.ok) {
    closeDb(db);
    return problemOf(made.problem.code, made.problem.where, made.problem.text);
  }
  const { ground, leave } = made.value;
  const seeded = await seedDemo(ground, sources.config);
  if (!seeded.ok) {
    await leave();
    closeDb(db);
    return problemOf(seeded.problem.code, seeded.problem.where, seeded.problem.text);
  }
  ground.onCommitted((committed) => tellOf(committed, tell));
  const stream = openStream(ground, (fault) => {
    setImmediate(() => {
      throw fault; // where nothing catches it: the process ends
    });
  });
  const answers = makeAnswers(ground, stream);
  const stopCheck = checkTrailAtStart(ground);
  const stopWatch = watchSnapshots(ground);
  const underWay = new Set<Promise<unknown>>();
  let closing = false;
  const answerOne = async <K extends QuestionKind>(kind: K, body: Questions[K]['body']): Promise<Questions[K]['answer']> => {
    try {
      return await answers[kind](body);
    } catch (fault) {
      if (isLostWrite(fault)) throw fault;
      ground.log.error({ err: fault, kind }, 'a question was not answered');
      throw new QuestionFailed(`the question ${kind} was not answered`);
    }
  };
  return valueOf({
    ground,
    answer: (kind, body) => {
      if (closing) return Promise.reject(new QuestionFailed('the writer is closing'));
      const answering = answerOne(kind, body);
      const settled: Promise<unknown> = answering.then(
        () => underWay.delete(settled),
        () => underWay.delete(settled),
      );
      underWay.add(settled);
      return answering;
    },
    close: async () => {
      closing = true;
      stopCheck();
      stopWatch();
      await Promise.all(underWay);
      await stream.close();
      await Promise.race([leave(), sleep(LEAVE_MS, undefined, { ref: false })]);
      closeDb(db);
    },
  });
}

function openOrProblem(dataDir: string): Outcome<Db> {
  try {
    return valueOf(openDb(dataDir));
  } catch (fault) {
    if (fault instanceof UnusableDatabase) return problemOf('database', 'DATA_DIR', fault.message);
    throw fault;
  }
}

function tellOf({ changes, revoked }: Committed, tell: TellNews): void {
  const lasts = new Map(changes.map(({ networkId, number }) => [networkId, number])); // numbers only rise
  for (const [networkId, last] of lasts) tell('changed', { networkId, last });
  for (const one of revoked) tell('revoked', one);
}

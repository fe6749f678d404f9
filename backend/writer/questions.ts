import { type SiteRecord } from '#shared/contract/site-record';
import { type SiteState, type SiteStateKept } from '#shared/contract/site-socket';
import { type Outcome } from '#shared/outcome';
import { type Answer } from '../api/answer';
import { type BatchFates, type HeldOfSite, type SiteSender } from '../sites-gate/site-desk';
import { type SentExchange } from './sent-exchange';
import { type Revoked } from './commit';

/**
 * What the HTTP thread asks of the writer thread, by kind: what is handed over and what comes back. Both are copied (structured clone) unless
 * their buffers are in the transfer list, so they are plain data, buffers and `Uint8Array`s.
 *
 * To add a kind: its line here, and what answers it in a function of your feature that `makeAnswers` (answers.ts) calls; the compiler wants
 * both.
 */
export interface Questions {
  /** A request that changes something. */
  'http:exchange': { readonly body: SentExchange; readonly answer: Answer };
  /** A site's key was used to read something. */
  'site-key:used': { readonly body: { readonly keyId: number }; readonly answer: undefined };
  /** What the gate for sites asks of the desk. */
  'site:hello': { readonly body: { readonly sender: SiteSender; readonly software: string }; readonly answer: HeldOfSite };
  'site:batch': { readonly body: { readonly sender: SiteSender; readonly records: readonly SiteRecord[] }; readonly answer: BatchFates };
  'site:state': {
    readonly body: { readonly sender: SiteSender; readonly state: SiteState };
    readonly answer: Outcome<SiteStateKept['completeTo']>;
  };
  'site:bye': { readonly body: { readonly connectionId: number; readonly why: string }; readonly answer: undefined };
}

export type QuestionKind = keyof Questions;

/**
 * What answers each kind, in the writer thread. One may wait (a promise): many questions are then answered at a time, and a group of them may
 * share one transaction. What it throws comes back to the asker as a `QuestionFailed`, except lost writes, which end the process.
 */
export type Answers = {
  readonly [K in QuestionKind]: (body: Questions[K]['body']) => Questions[K]['answer'] | Promise<Questions[K]['answer']>;
};

/** What the writer thread tells unasked, after the commit that it tells of. */
export interface News {
  /** A network has changed, up to this number. */
  readonly changed: { readonly networkId: number; readonly last: number };
  readonly revoked: Revoked;
}

/** Buffers that change hands in place of being copied: whoever sends them has them no more. */
export type Transfer = readonly ArrayBuffer[];

/** A question that the writer could not answer; the reason is in the log. */
export class QuestionFailed extends Error {}

/** The writer as the HTTP thread sees it. */
export interface Writer {
  /**
   * Asks the writer.
   *
   * @returns its answer; never settles when the writer breaks down, since the process then ends: nobody gets a false answer
   * @throws QuestionFailed when the answering function threw; Refusal 503 for exchanges, when too many wait; and when it is closing
   */
  readonly ask: <K extends QuestionKind>(kind: K, body: Questions[K]['body'], transfer?: Transfer) => Promise<Questions[K]['answer']>;
  /** Hears the writer's news; what comes back ends it. */
  readonly on: <K extends keyof News>(kind: K, listener: (news: News[K]) => void) => () => void;
  /** No new question is taken; those that wait are answered, mails are sent, the log is written back and the database closed. */
  readonly close: () => Promise<void>;
}

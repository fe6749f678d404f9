import { type Facts } from './begin-writer';
import { type News, type QuestionKind, type Questions } from './questions';

/** What the HTTP thread sends to the writer thread. */
export type ToWriter = AnyQuestion | { readonly is: 'close' };

type AnyQuestion = {
  [K in QuestionKind]: { readonly is: 'question'; readonly id: number; readonly kind: K; readonly body: Questions[K]['body'] };
}[QuestionKind];

/** What the writer thread sends back, all that is said in one turn in one message. */
export type FromWriter =
  | { readonly is: 'ready'; readonly facts: Facts }
  /** It did not begin, for what the server's user can mend. */
  | { readonly is: 'refused'; readonly text: string }
  /** It did not begin, for another reason. */
  | { readonly is: 'failed'; readonly text: string }
  | { readonly is: 'answer'; readonly id: number; readonly answer: Questions[QuestionKind]['answer'] }
  | { readonly is: 'unanswered'; readonly id: number; readonly text: string }
  | AnyNews
  | { readonly is: 'closed' };

type AnyNews = { [K in keyof News]: { readonly is: 'news'; readonly kind: K; readonly news: News[K] } }[keyof News];

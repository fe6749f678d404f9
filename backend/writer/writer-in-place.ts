import { valueOf, type Outcome } from '#shared/outcome';
import { type Ground } from '../ground';
import { beginWriter, type WriterSources } from './begin-writer';
import { newsDesk } from './news-desk';
import { type Writer } from './questions';

/** A writer in the thread of who asks: for tests, which reach its ground. What crosses is copied, as between threads. */
export async function writerInPlace(sources: WriterSources): Promise<Outcome<{ readonly writer: Writer; readonly ground: Ground }>> {
  const { tell, on } = newsDesk();
  const begun = await beginWriter(sources, (kind, news) => setImmediate(() => tell(kind, structuredClone(news))));
  if (!begun.ok) return begun;
  const { ground, answer, close } = begun.value;
  const writer: Writer = {
    ask: async (kind, body, transfer = []) => structuredClone(await answer(kind, structuredClone(body, { transfer: [...transfer] }))),
    on,
    close,
  };
  return valueOf({ writer, ground });
}

import { type News, type Writer } from './questions';
import { type TellNews } from './begin-writer';

type Listeners = { readonly [K in keyof News]: Set<(news: News[K]) => void> };

/** Hands the writer's news to whoever listens. */
export function newsDesk(): { readonly tell: TellNews; readonly on: Writer['on'] } {
  const listeners: Listeners = { changed: new Set(), revoked: new Set() };
  return {
    tell: (kind, news) => {
      for (const listener of listeners[kind]) listener(news);
    },
    on: (kind, listener) => {
      listeners[kind].add(listener);
      return () => void listeners[kind].delete(listener);
    },
  };
}

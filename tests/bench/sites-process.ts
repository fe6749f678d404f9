import { fork } from 'node:child_process';
import { join } from 'node:path';

/** What the process of the sites is told to do; it answers each with the figures of it. */
export type Order =
  /** Connects; the network is followed as a browser does. */
  | {
      readonly is: 'begin';
      readonly url: string;
      readonly keys: readonly string[];
      readonly cookie: string;
      readonly networkId: number;
      readonly bareUrl: string;
    }
  /** Streams what a network of the rate would have gathered, as fast as it is taken. */
  | { readonly is: 'burst'; readonly records: number; readonly rateHz: number }
  /** Sends each trigger when it happens, and looks when its coincidences come. */
  | { readonly is: 'pace'; readonly seconds: number; readonly rateHz: number }
  /** Asks the bare server, one message at a time. */
  | { readonly is: 'bare'; readonly seconds: number; readonly perS: number };

export interface Figures {
  readonly records: number;
  readonly seconds: number;
  /** From a batch's sending to its acknowledgement, of each. */
  readonly acknowledgedMs: readonly number[];
  /** From a trigger's sending to its coincidence at the browser, of each coincidence; of the bare server the round trips. */
  readonly seenMs: readonly number[];
  /** Messages that came so late that they could not tell all coincidences; those are missing among the figures. */
  readonly cuts: number;
}

/** The process of the sites and of the browser. */
export interface SitesProcess {
  readonly tell: (order: Order) => Promise<Figures>;
  readonly end: () => void;
}

export function startSitesProcess(): SitesProcess {
  const child = fork(join(import.meta.dirname, 'sites.bench.js'), { stdio: 'inherit' });
  return {
    tell: (order) =>
      new Promise((resolve, reject) => {
        const ended = (code: number | null): void => reject(new Error(`the sites ended with ${code ?? 'a signal'}`));
        child.once('exit', ended);
        child.once('message', (figures) => {
          child.off('exit', ended);
          resolve(figures as Figures);
        });
        child.send(order);
      }),
    end: () => void child.kill(),
  };
}

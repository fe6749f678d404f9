import { type NetworkChanged, type NetworkChanges } from './live-changes';

/** What the changes that came last mean for who has all up to a number. */
export type Joint = 'next' | 'known' | 'missing';

/**
 * How changes join what is had: they follow it (an overlap doubles nothing), are in it already, or some before them are missing.
 *
 * @param had the number up to which all changes are had
 * @param changed what came; a sum tells nothing by itself, so that all it stands for is missing
 */
export function jointOf(had: number, { kind, from, to }: Pick<NetworkChanged, 'kind' | 'from' | 'to'>): Joint {
  if (to <= had) return 'known';
  return kind === 'sum' || from > had + 1 ? 'missing' : 'next';
}

/** What is answered to whoever asks for missed changes; undefined where they are no longer kept. */
export type MissedPart = { readonly changes: NetworkChanges | null; readonly last: number } | undefined;

/** What a follower leans on. */
export interface FollowerGround {
  /** Asks for changes behind a number; what it rejects with ends the catching up, until the next news or `begin`. */
  readonly missed: (after: number) => Promise<MissedPart>;
  /** Changes, each from the number behind the last one's, or overlapping it. */
  readonly told: (changes: NetworkChanges) => void;
  /** What was told can no longer be gone on from: take everything anew. */
  readonly anew: () => void;
  /** Whether missed changes are being asked for. */
  readonly isCatchingUp: (catching: boolean) => void;
  /** By which what comes is joined; `jointOf` for all but a test of this. */
  readonly joint?: typeof jointOf;
}

/** One browser's place in the changes of one network, whatever the link does. */
export interface Follower {
  /** The number up to which all changes were told; undefined before the first `begin`. */
  readonly had: () => number | undefined;
  /** The link follows (again): `last` and `isKept` as the server answered. */
  readonly begin: (answer: { readonly last: number; readonly isKept: boolean }) => void;
  readonly changed: (news: NetworkChanged) => void;
}

/**
 * Makes a follower, which tells every change once and in order, asks once at a time for those that are missing, and says when everything must
 * be taken anew.
 *
 * @param ground its link and its listeners; never called before `begin`
 * @returns the follower; what comes while it catches up is not kept, since the answers hold it
 */
export function followerOf({ missed, told, anew, isCatchingUp, joint = jointOf }: FollowerGround): Follower {
  let had: number | undefined;
  let newest = 0; // the last change that is known of
  let asking: Promise<void> | undefined;
  let begun = 0;

  const startAt = (number: number): void => {
    had = number;
    anew();
  };

  const take = (changes: NetworkChanges): void => {
    had = changes.to;
    told(changes);
  };

  async function ask(after: number, turn: number): Promise<'more' | 'done'> {
    const part = await missed(after);
    if (turn !== begun) return 'done';
    if (part === undefined) {
      startAt(newest);
      return 'done';
    }
    newest = Math.max(newest, part.last);
    if (part.changes !== null) take(part.changes);
    // News that came with the answer may be of later changes than it holds.
    return (had ?? 0) < newest && (part.changes !== null || part.last < newest) ? 'more' : 'done';
  }

  async function catchUp(turn: number): Promise<void> {
    isCatchingUp(true);
    try {
      while (had !== undefined && turn === begun && (await ask(had, turn)) === 'more');
    } catch {
      // The link was lost meanwhile, or the server could not: what comes next shows again that some are missing.
    }
    if (turn !== begun) return;
    asking = undefined;
    isCatchingUp(false);
  }

  const askOnce = (): void => {
    asking ??= catchUp(begun);
  };

  return {
    had: () => had,
    begin: ({ last, isKept }) => {
      begun++;
      asking = undefined;
      newest = last;
      isCatchingUp(false);
      if (had === undefined || !isKept) startAt(last);
      else if (had < last) askOnce();
    },
    changed: (news) => {
      if (had === undefined) return;
      newest = Math.max(newest, news.to);
      if (asking) return;
      const found = joint(had, news);
      if (found === 'missing') askOnce();
      else if (found === 'next' && news.kind === 'changes') take(news);
    },
  };
}

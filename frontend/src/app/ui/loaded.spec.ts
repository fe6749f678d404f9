import { describe, expect, it } from 'vitest';
import { ApiProblem } from '../api/api-problem';
import { Loader } from './loaded';

const FAULTS = {
  unanswered: new ApiProblem({ status: 0, text: 'The server does not answer.' }),
  refused: new ApiProblem({ status: 403, text: 'You may not see this.' }),
  own: new TypeError('a fault of the page itself'),
};

describe('Loader', () => {
  async function askedTwice(second: Error): Promise<Loader<number>> {
    const answers: (number | Error)[] = [7, second];
    const loader = new Loader(() => {
      const answer = answers.shift()!;
      return answer instanceof Error ? Promise.reject(answer) : Promise.resolve(answer);
    });
    await loader.load();
    expect(loader.value()).toBe(7);
    await loader.load();
    return loader;
  }

  it('keeps what is there where the server does not answer when asked again', async () => {
    expect((await askedTwice(FAULTS.unanswered)).value()).toBe(7);
  });

  it('takes away what may not be seen any longer, and what the page itself cannot read', async () => {
    expect((await askedTwice(FAULTS.refused)).state()).toMatchObject({ kind: 'failed', status: 403 });
    expect((await askedTwice(FAULTS.own)).state()).toMatchObject({ kind: 'failed', status: undefined });
  });

  it('says at the first time that the server does not answer', async () => {
    const loader = new Loader(() => Promise.reject(FAULTS.unanswered));
    await loader.load();
    expect(loader.state()).toMatchObject({ kind: 'failed', status: 0 });
  });
});

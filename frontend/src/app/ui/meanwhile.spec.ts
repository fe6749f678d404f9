import { describe, expect, it } from 'vitest';
import { ApiProblem } from '../api/api-problem';
import { differences, Meanwhile } from './meanwhile';

interface Thing {
  readonly version: number;
  readonly delayNs: number;
}
const words = ({ delayNs }: Thing) => ({ 'Cable delay': `${delayNs} ns` });
const seen: Thing = { version: 1, delayNs: 5 };
const fresh: Thing = { version: 2, delayNs: 7 };
const tooLate = () => Promise.reject(new ApiProblem({ status: 409, text: 'Someone changed this.', where: 'version' }));

describe('an edit that came too late', () => {
  it('says what differs, gives the thing as it stands, and is refused all the same', async () => {
    const meanwhile = new Meanwhile<Thing>(() => Promise.resolve(fresh), words);
    const given: Thing[] = [];
    await expect(meanwhile.around(seen, tooLate, (thing) => given.push(thing))).rejects.toThrow('Someone changed this.');
    expect(given).toEqual([fresh]);
    expect(meanwhile.differences()).toEqual([{ name: 'Cable delay', was: '5 ns', now: '7 ns' }]);
    await meanwhile.around(fresh, () => Promise.resolve(1), () => given.push(fresh)); // prettier-ignore
    expect(meanwhile.differences()).toBeUndefined();
  });

  it('is not what another refusal is: a code that is taken says nothing of a meanwhile', async () => {
    const meanwhile = new Meanwhile<Thing>(() => Promise.reject(new Error('not asked')), words);
    const taken = () => Promise.reject(new ApiProblem({ status: 409, text: 'taken', where: 'code' }));
    await expect(meanwhile.around(seen, taken, () => undefined)).rejects.toThrow('taken');
    expect(meanwhile.differences()).toBeUndefined();
  });
});

describe('what differs', () => {
  it('names what came and what went', () => {
    expect(differences({ a: '1', b: '2' }, { b: '2', c: '3' })).toEqual([
      { name: 'a', was: '1', now: 'none' },
      { name: 'c', was: 'none', now: '3' },
    ]);
  });
});

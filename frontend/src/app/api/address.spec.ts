import { describe, expect, it } from 'vitest';
import { addressOf, queryOf } from './address';

describe('the address of a route', () => {
  it('has its parameters put in and encoded', () => {
    expect(addressOf('/people/:personId/roles', { personId: 12 })).toBe('/api/people/12/roles');
    expect(addressOf('/x/:name', { name: 'a/b?c' })).toBe('/api/x/a%2Fb%3Fc');
  });

  it('throws where a parameter is not given', () => {
    expect(() => addressOf('/people/:personId', {})).toThrow('cannot stand in an address');
  });

  it('leaves out of the query what is not given', () => {
    expect(queryOf({ cursor: '7', limit: 50, action: undefined })).toEqual({ cursor: '7', limit: '50' });
  });
});

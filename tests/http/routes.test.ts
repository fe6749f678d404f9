import { join } from 'node:path';
import { format, resolveConfig } from 'prettier';
import { describe, expect, it } from 'vitest';
import * as z from 'zod';
import { policyOf } from '#shared/contract/policies';
import { type Route } from '#shared/contract/routes';
import { DECLARED, nameOf } from '../support/declared';

const GOLDEN = join(import.meta.dirname, '../../shared/contract/ROUTES.md');

const HEAD = `# The routes of the API

Below \`/api\`. \`npx vitest run tests/http/routes.test.ts -u\` writes this file from what \`*-routes.ts\` declare; a change of the API shows here. Who may: the roles there, and "anywhere" where one held in any network will do. Fields with ? may be absent.

| method | path | who may | query | body | success |
| --- | --- | --- | --- | --- | --- |
`;

function whoMay({ policy: name }: Route): string {
  const policy = policyOf(name);
  if (policy?.who !== 'roles') return policy?.who.replace('-', ' ') ?? '';
  const roles = policy.roles.length === 4 ? 'every role' : policy.roles.join(', ');
  return policy.in === 'anywhere' ? `${roles}, anywhere` : roles;
}

const shapeOf = (schema: z.ZodType): Readonly<Record<string, z.ZodType>> => (schema instanceof z.ZodObject ? schema.shape : {});

const fields = (schema: z.ZodType): string =>
  Object.entries(shapeOf(schema))
    .map(([name, field]) => `${name}${field.safeParse(undefined).success ? '?' : ''}`)
    .join(', ');

const row = (route: Route): string =>
  `| ${[route.method, `\`${route.path}\``, whoMay(route), fields(route.query), fields(route.body), route.status].join(' | ')} |\n`;

describe('the routes', () => {
  it('stand in shared/contract/ROUTES.md as they are declared', async () => {
    const options = await resolveConfig(GOLDEN);
    await expect(await format(HEAD + DECLARED.map(row).join(''), { ...options, parser: 'markdown' })).toMatchFileSnapshot(GOLDEN);
  });
});

/** What no field takes, or hardly one: each is put into each field of each query and body. */
const WRONG: readonly unknown[] = [['1', '2'], '', '~', 'x'.repeat(5000), '-1', null, 1.5, -1, true, {}, [], [1], { x: 1 }, undefined];
/** The validator's own words. */
const FOREIGN_WORDS = /invalid|too (?:big|small)|unrecognized|expected|received|regex|pattern/i;

describe('what a request is told of a field', () => {
  it.each(DECLARED.map((route) => [nameOf(route), route] as const))('is in our own words: %s', (_name, route) => {
    const faults: string[] = [];
    let told = 0;
    for (const schema of [route.query, route.body]) {
      const names = Object.keys(shapeOf(schema));
      const inputs = [
        ...WRONG,
        { surplus: 1 },
        ...names.flatMap((name) => WRONG.map((value) => ({ [name]: value }))),
        ...WRONG.map((value) => Object.fromEntries(names.map((name) => [name, value]))),
      ];
      for (const input of inputs)
        for (const { message, path } of schema.safeParse(input).error?.issues ?? []) {
          told += 1;
          if (FOREIGN_WORDS.test(message)) faults.push(`${JSON.stringify([input]).slice(0, 80)}: ${path.join('.')} ${message}`);
        }
    }
    expect(faults).toEqual([]);
    expect(told).toBeGreaterThan(0);
  });
});

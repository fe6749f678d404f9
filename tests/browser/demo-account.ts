import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { type Page } from '@playwright/test';
import * as z from 'zod';

const accounts = z.object({ people: z.array(z.object({ role: z.string(), email: z.string(), password: z.string() })) });

/** Someone who can sign in. */
export interface Account {
  readonly email: string;
  readonly password: string;
}

/** The demo's account of a role: what the server prints at its start. */
export function demoAccount(dataDir: string, role: string): Account {
  const { people } = accounts.parse(JSON.parse(readFileSync(join(dataDir, 'demo.json'), 'utf8')));
  const found = people.find((person) => person.role === role);
  if (!found) throw new Error(`the demo has no ${role}`);
  return found;
}

/** Signs in and waits for the first page. */
export async function enter(page: Page, { email, password }: Account): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('Email').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.getByRole('navigation').first().waitFor();
}

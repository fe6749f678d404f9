import { type ChildProcess, spawn } from 'node:child_process';
import { join } from 'node:path';
import { root } from '../../scripts/lib.mjs';
import { type Ended } from './server';

/** The built command, as `npx skewline` runs it. */
export const SKEWLINE: readonly string[] = [process.execPath, join(root, 'dist/backend/skewline.js')];

/** Starts a program, without a terminal, and gathers what it says. */
export function startProgram(
  command: readonly string[],
  cwd = root,
  stdin: 'ignore' | 'pipe' = 'ignore',
): { process: ChildProcess; ended: Promise<Ended> } {
  const [program = '', ...args] = command;
  const child = spawn(program, args, { cwd, env: { PATH: process.env['PATH'] }, stdio: [stdin, 'pipe', 'pipe'] });
  let stdout = '';
  let stderr = '';
  child.stdout?.setEncoding('utf8').on('data', (text: string) => (stdout += text));
  child.stderr?.setEncoding('utf8').on('data', (text: string) => (stderr += text));
  const ended = new Promise<Ended>((resolve) => {
    child.once('close', (code, signal) => {
      resolve({ code, signal, stdout, stderr });
    });
  });
  return { process: child, ended };
}

/** Runs the built command to its end. */
export const skewline = (args: readonly string[], cwd?: string): Promise<Ended> => startProgram([...SKEWLINE, ...args], cwd).ended;

import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { root } from '../../scripts/lib.mjs';
import { startChaosProxy } from '../support/chaos-proxy';
import { startProgram } from '../support/command';
import { newFolder } from '../support/folder';
import { recordingDesk, startGate, type RunningGate } from './gate';

let gate: RunningGate;
afterEach(() => gate.close());

/** The client that the README shows, as a file of its own: plain Node, with nothing of the project's. */
function clientOfReadme(): string {
  const program = /```js\n(import \{ io \}[^`]*(?:`[^`]+`[^`]*)*?)```/.exec(readFileSync(join(root, 'README.md'), 'utf8'))?.[1] ?? '';
  const imports = [...program.matchAll(/from '([^']+)'/g)].map((match) => match[1]);
  expect(imports).toEqual(['socket.io-client']);
  const file = join(newFolder('foreign'), 'tower.mjs');
  writeFileSync(file, program);
  return file;
}

describe('a client written from the README alone', () => {
  it('streams in, hears of each record, and is known when it sends again', async () => {
    const desk = recordingDesk();
    gate = await startGate(desk);
    const command = [process.execPath, clientOfReadme(), gate.url, gate.keys[0], '250'];
    const first = await startProgram(command).ended;
    expect([first.code, first.stderr]).toEqual([0, '']);
    expect(desk.kept.size).toBe(250);
    expect(first.stdout.trim().split('\n')).toHaveLength(3);
    expect(desk.said).toContain('state {"completeTo":{"taiS":1772366497,"ps":0}} after 250');
    const again = await startProgram(command).ended;
    expect(again.code).toBe(0);
    expect(again.stdout).not.toMatch(/"stored":\[\[/);
    expect(desk.kept.size).toBe(250);
  });

  it('says that its link broke, and ends', async () => {
    const desk = recordingDesk();
    gate = await startGate(desk);
    const proxy = await startChaosProxy(gate.port);
    desk.delayMs = 60_000; // no answer comes before the cut
    const running = startProgram([process.execPath, clientOfReadme(), `http://127.0.0.1:${proxy.port}`, gate.keys[0], '1']);
    await vi.waitFor(() => expect(desk.attempts).toBe(1), 15_000);
    proxy.cut();
    const { code, stderr } = await running.ended;
    await proxy.close();
    expect([code, stderr]).toEqual([1, expect.stringMatching(/^the link was lost \(transport close\)\n$/)]);
  });

  it('ends with the reason when its key is refused', async () => {
    gate = await startGate(recordingDesk());
    const { code, stderr } = await startProgram([process.execPath, clientOfReadme(), gate.url, 'swk_wrong', '1']).ended;
    expect(code).toBe(1);
    expect(stderr).toContain('The key is unknown here');
  });
});

import { type TestProject } from 'vitest/node';
import { buildBackend } from '../../scripts/lib.mjs';

/** Commands, the server and its workers are tested as they run, from the bundle: it is made before the tests and again on each rerun. */
export function setup(project: TestProject): void {
  buildBackend();
  project.onTestsRerun(() => {
    buildBackend();
    return Promise.resolve();
  });
}

import { type Problem } from '#shared/outcome';

/** What the user gave cannot be used: one clear line and exit status 2. */
export class UsageProblem extends Error {
  static of(problem: Problem, file?: string): UsageProblem {
    return new UsageProblem([file, problem.where, problem.text].filter((part) => part !== undefined && part !== '').join(': '));
  }
}

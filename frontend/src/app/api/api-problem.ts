/** A request that did not do what was asked: what the server said of it, or that nothing came back. */
export class ApiProblem extends Error {
  override readonly name = 'ApiProblem';
  /** The status of the answer; 0 when the server was not reached. */
  readonly status: number;
  /** The path of the field that cannot be used, where there is one. */
  readonly where: string | undefined;
  /** Stands in the server's log beside the request. */
  readonly id: string | undefined;

  constructor(told: { readonly status: number; readonly text: string; readonly where?: string; readonly id?: string }) {
    super(told.text);
    this.status = told.status;
    this.where = told.where;
    this.id = told.id;
  }
}

/** What a screen says of a fault: a problem's own sentence, and of anything else that it is ours. */
export const sentenceOf = (fault: unknown): string =>
  fault instanceof ApiProblem ? fault.message : 'This page made a mistake. Reload it and try again.';

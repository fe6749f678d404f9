import '../contract-settings';
import { HttpClient } from '@angular/common/http';
import { inject, Injectable } from '@angular/core';
import { firstValueFrom } from 'rxjs';
import type * as z from 'zod';
import { type Route } from '#shared/contract/routes';
import { addressOf, type Given, queryOf } from './address';
import { ApiProblem } from './api-problem';
import { readFault } from './read-fault';
import { SessionKeeper } from './session-keeper';

/** What one call of a route carries: its parameters, query and body, each where the route has one. */
export type Asked<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType> = Part<'params', z.output<P>> &
  Part<'query', z.output<Q>> &
  Part<'body', z.input<B>>;

/** A part of which nothing is wanted may be left out; one without any field is a record of nothing by any name. */
type Part<Name extends string, Value> = string extends keyof Value
  ? Readonly<Partial<Record<Name, undefined>>>
  : Partial<Value> extends Value
    ? Readonly<Partial<Record<Name, Value>>>
    : Readonly<Record<Name, Value>>;

/** The one way to the server's HTTP: routes as the contract declares them, answers checked, faults as problems with a sentence. */
@Injectable({ providedIn: 'root' })
export class ApiClient {
  private readonly http = inject(HttpClient);
  private readonly session = inject(SessionKeeper);

  /**
   * Calls a route. A session that ended meanwhile is renewed, or the person is asked for the password in place, and then the call goes on.
   *
   * @throws ApiProblem when the server refuses, cannot, or is not reached
   */
  async call<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, A extends z.ZodType>(
    route: Route<P, Q, B, A>,
    asked: Asked<P, Q, B>,
  ): Promise<z.output<A>> {
    const mayRenew = !ENDS_OR_BEGINS.test(route.policy);
    if (mayRenew) await this.session.renewWhenDue(() => this.renew());
    const askedAtMs = Date.now();
    try {
      return await this.once(route, asked);
    } catch (fault) {
      if (!mayRenew || !(fault instanceof ApiProblem) || fault.status !== 401) throw fault;
      await this.session.renewAfter(askedAtMs, () => this.renew());
      return this.once(route, asked);
    }
  }

  /** Renews the session where it is due, so that what leans on it between two calls goes on. */
  keepSession(): Promise<void> {
    return this.session.renewWhenDue(() => this.renew());
  }

  private renew(): Promise<unknown> {
    return firstValueFrom(this.http.post('/api/refresh', {})).catch((fault: unknown) => {
      throw readFault(fault);
    });
  }

  private async once<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, A extends z.ZodType>(
    { method, path, answer }: Route<P, Q, B, A>,
    asked: { readonly params?: unknown; readonly query?: unknown; readonly body?: unknown },
  ): Promise<z.output<A>> {
    const url = addressOf(path, fields(asked.params));
    const options = { params: queryOf(fields(asked.query)), ...(method !== 'GET' && { body: asked.body ?? {} }) };
    let came: unknown;
    try {
      came = await firstValueFrom(this.http.request<unknown>(method, url, options));
    } catch (fault) {
      throw readFault(fault);
    }
    const read = answer.safeParse(came ?? undefined);
    if (read.success) return read.data;
    throw new ApiProblem({
      status: 200,
      text: 'The server answered what this page cannot read. Reload the page to get its newer version.',
    });
  }
}

const ENDS_OR_BEGINS = /^(?:session:|invitation:|reset:|health:)/;

const fields = (value: unknown): Given => (typeof value === 'object' && value !== null ? { ...value } : {});

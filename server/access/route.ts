import 'server-only';
import type { ZodType } from 'zod';
import { AppError, errorBody } from '@/lib/errors/app-error';
import { report } from '@/server/diagnostics/report';
import { env } from '@/server/env/env';
import { readJsonBody } from './body';
import { inFlight } from './in-flight';
import { refuseCrossSite } from './origin';
import { findPerson } from './person';
import type { Action } from './rights';
import { toAppError } from './to-app-error';
import { authorise, type ScopeOf } from './scope';

type RouteContext = { params: Promise<Record<string, string | string[]>> };

export type Call<A extends Action, B, Q> = {
  request: Request;
  params: Record<string, string>;
  body: B;
  query: Q;
} & { scope: ScopeOf<A> };

type Spec<A extends Action, B, Q> = {
  action: A;
  /** Which parameter names the resource; `id` unless said (notebooks go by `code`). */
  param?: string;
  body?: ZodType<B>;
  query?: ZodType<Q>;
  maxBytes?: number;
};

/**
 * The one way into the application for a request: origin, person, right, shape of the input, then the handler; errors become
 * `{error: {code, message, field?, details?}}`. Handlers return a Response or something to send as JSON.
 */
export function withAccess<A extends Action, B = undefined, Q = undefined>(
  spec: Spec<A, B, Q>,
  handler: (call: Call<A, B, Q>) => Promise<Response | object | null>,
) {
  const answer = async (request: Request, context: RouteContext): Promise<Response> => {
    refuseCrossSite(request);
    const params = Object.fromEntries(
      Object.entries((await context.params) ?? {}).map(([key, value]) => [
        key,
        Array.isArray(value) ? value.join('/') : value,
      ]),
    );
    const person = await findPerson(request.headers);
    const scope = await authorise(spec.action, person, params[spec.param ?? 'id'] ?? params.code ?? null);
    const query = spec.query ? parse(spec.query, Object.fromEntries(new URL(request.url).searchParams)) : undefined;
    const body = spec.body ? parse(spec.body, await readJsonBody(request, spec.maxBytes ?? 1_000_000)) : undefined;
    const result = await handler({ request, params, scope, body: body as B, query: query as Q });
    return result instanceof Response ? result : send(200, result ?? {});
  };
  const route = async (request: Request, context: RouteContext): Promise<Response> => {
    try {
      return await inFlight(() => answer(request, context));
    } catch (error) {
      const refused = toAppError(error);
      if (refused.status >= 500)
        report('request failed', { method: request.method, path: new URL(request.url).pathname }, error);
      return send(refused.status, errorBody(refused));
    }
  };
  // The architecture test reads this mark: a route without it is not wrapped.
  return Object.assign(route, { action: spec.action });
}

function parse<T>(schema: ZodType<T>, input: unknown): T {
  const parsed = schema.safeParse(input);
  if (parsed.success) return parsed.data;
  const issue = parsed.error.issues[0];
  const field = issue.path.join('.');
  throw new AppError('invalid', issue.message, field ? { field } : {});
}

/** JSON that no cache keeps. */
export function send(status: number, body: object, headers: Record<string, string> = {}): Response {
  return Response.json(body, {
    status,
    headers: {
      'cache-control': 'no-store',
      'content-security-policy': "default-src 'none'; frame-ancestors 'none'; sandbox",
      'x-content-type-options': 'nosniff',
      'x-kelvinleaf-build': env().buildId,
      ...headers,
    },
  });
}

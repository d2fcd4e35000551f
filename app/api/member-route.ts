import type { z } from 'zod';
import { LabError } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { problemResponse } from '@/auth/problem';
import { withMember, type MemberContext, type MemberRoute, type RouteHandler } from '@/auth/with-member';
import { METHODS, ROUTES, type Method, type RouteKey } from './route-table';

type Part<K extends RouteKey, Name extends 'body' | 'query'> =
  (typeof ROUTES)[K] extends Record<Name, infer S extends z.ZodType> ? z.output<S> : undefined;

/** The handler of a route of the table, behind the wrapper: rights and schemas come from the table. */
export function memberRoute<K extends RouteKey>(
  key: K,
  handler: (context: MemberContext<Part<K, 'body'>, Part<K, 'query'>>) => Promise<unknown>,
): RouteHandler {
  return withMember(
    ROUTES[key] as MemberRoute,
    handler as (context: MemberContext<unknown, unknown>) => Promise<unknown>,
  );
}

type Handlers = Partial<Record<Method, RouteHandler>>;

/** All methods of a path: those that it does not know answer 405 with a problem document. */
export function methods(handlers: Handlers): Record<Exclude<Method, 'HEAD'>, RouteHandler> {
  const known = METHODS.filter((method) => handlers[method] ?? (method === 'HEAD' && handlers.GET));
  const refuse: RouteHandler = async (request) =>
    problemResponse(
      new LabError('METHOD', `${request.method} is not known here. Known: ${known.join(', ')}.`, {
        headers: { Allow: known.join(', ') },
      }),
      newId(),
    );
  const all = METHODS.filter((method) => method !== 'HEAD').map((method) => [
    method,
    handlers[method] ?? refuse,
  ]);
  return Object.fromEntries(all) as Record<Exclude<Method, 'HEAD'>, RouteHandler>;
}

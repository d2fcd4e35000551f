import { z } from 'zod';
import { whoMay, ACTIONS } from '@/lib/access';
import { problemSchema } from '@/lib/views/common';
import { ROUTES, type ApiRoute, type Method } from './route-table';

type Json = Record<string, unknown>;

/** The OpenAPI 3.1 document of all routes of the table, from the schemas that check them. */
export function openApiDocument(): Json {
  const paths: Record<string, Json> = {};
  for (const [key, route] of Object.entries(ROUTES) as [string, ApiRoute][]) {
    const [method, path] = key.split(' ') as [Method, string];
    (paths[path] ??= {})[method.toLowerCase()] = operation(method, path, route);
  }
  return {
    openapi: '3.1.0',
    info: { title: 'Beadline', version: '1', description: DESCRIPTION },
    servers: [{ url: '/api/v1' }],
    security: [{ token: [] }, { session: [] }],
    paths,
    components: {
      securitySchemes: {
        token: { type: 'http', scheme: 'bearer' },
        session: { type: 'apiKey', in: 'cookie', name: 'beadline-session' },
      },
      schemas: { Problem: jsonSchema(problemSchema, 'output') },
    },
  };
}

const DESCRIPTION =
  'Values are SI, units stand last in names. Lists are {items, nextCursor}. Errors are problem documents ' +
  '(RFC 9457). POST takes Idempotency-Key; PATCH takes If-Match with the revision of ETag.';

const TUS_NOTE = 'See the tus resumable upload protocol, 1.0.0.';

function operation(method: Method, path: string, route: ApiRoute): Json {
  const isUpload = path.startsWith('/uploads');
  const body = route.body && {
    requestBody: {
      required: true,
      content: { 'application/json': { schema: jsonSchema(route.body, 'input') } },
    },
  };
  return {
    operationId: operationId(method, path),
    summary: route.summary,
    description: `May: ${whoMay(route.action)}. Scope of a token: ${ACTIONS[route.action].scope}.${isUpload ? ` ${TUS_NOTE}` : ''}`,
    parameters: [...pathParameters(path), ...queryParameters(route), ...headerParameters(method, route)],
    ...body,
    responses: {
      [String(route.status ?? 200)]: answerOf(route),
      default: {
        description: 'Why not',
        content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } },
      },
    },
  };
}

function answerOf(route: ApiRoute): Json {
  if (route.answer) {
    const schema = jsonSchema(route.answer, 'output');
    return { description: route.summary, content: { 'application/json': { schema } } };
  }
  return route.media
    ? { description: route.summary, content: { [route.media]: {} } }
    : { description: route.summary };
}

const pathParameters = (path: string): Json[] =>
  [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => ({
    name,
    in: 'path',
    required: true,
    schema: name.endsWith('Id') ? { type: 'string', format: 'uuid' } : { type: 'string' },
  }));

function queryParameters({ query }: ApiRoute): Json[] {
  if (!query) return [];
  const { properties = {}, required = [] } = jsonSchema(query, 'input') as {
    properties?: Record<string, Json>;
    required?: string[];
  };
  return Object.entries(properties).map(([name, schema]) => ({
    name,
    in: 'query',
    required: required.includes(name),
    schema,
  }));
}

function headerParameters(method: Method, { ifMatch, idempotent }: ApiRoute): Json[] {
  const header = (name: string, required: boolean) => ({
    name,
    in: 'header',
    required,
    schema: { type: 'string' },
  });
  if (ifMatch) return [header('If-Match', true)];
  return method === 'POST' && idempotent !== false ? [header('Idempotency-Key', false)] : [];
}

function operationId(method: Method, path: string): string {
  const words = path.split(/[^A-Za-z]+/).filter(Boolean);
  return method.toLowerCase() + words.map((word) => word[0].toUpperCase() + word.slice(1)).join('');
}

function jsonSchema(schema: z.ZodType, io: 'input' | 'output'): Json {
  const { $schema: _, ...rest } = z.toJSONSchema(schema, { io, unrepresentable: 'any' }) as Json;
  return rest;
}

import { describe, expect, it } from 'vitest';
import { openApiDocument } from '@/app/api/openapi';
import { ROUTES } from '@/app/api/route-table';

interface Operation {
  operationId: string;
  parameters: { name: string; in: string; schema: Record<string, unknown> }[];
  requestBody?: {
    content: Record<
      string,
      { schema: { properties?: Record<string, unknown>; additionalProperties?: unknown } }
    >;
  };
  responses: Record<string, unknown>;
}
const document = openApiDocument() as {
  openapi: string;
  paths: Record<string, Record<string, Operation>>;
};
const operations = Object.values(document.paths).flatMap((path) => Object.values(path));

describe('the OpenAPI document', () => {
  it('describes every route of the table, and none besides', () => {
    const described = Object.entries(document.paths).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method.toUpperCase()} ${path}`),
    );
    expect(document.openapi).toBe('3.1.0');
    expect(described.sort()).toEqual(Object.keys(ROUTES).sort());
  });

  it('names every operation once', () => {
    const ids = operations.map(({ operationId }) => operationId);
    expect(new Set(ids).size).toBe(ids.length);
  });

  it('declares each parameter that stands in a path', () => {
    for (const [path, methods] of Object.entries(document.paths)) {
      const inPath = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
      for (const { parameters } of Object.values(methods)) {
        expect(parameters.filter((p) => p.in === 'path').map((p) => p.name)).toEqual(inPath);
      }
    }
  });

  it('says that unknown fields of a body are refused, as the schemas do', () => {
    interface Form {
      additionalProperties?: unknown;
      anyOf?: Form[];
      oneOf?: Form[];
    }
    const assertClosed = (form: Form) => {
      const forms = form.anyOf ?? form.oneOf;
      if (forms) forms.forEach(assertClosed);
      else expect(form.additionalProperties).toBe(false);
    };
    for (const { requestBody } of operations) {
      if (requestBody) assertClosed(requestBody.content['application/json'].schema as Form);
    }
  });

  it('says the bounds of a list', () => {
    const limit = document.paths['/campaigns'].get.parameters.find(({ name }) => name === 'limit');
    expect(limit?.in).toBe('query');
    const { properties } =
      document.paths['/campaigns/{campaignId}/runs'].post.requestBody!.content['application/json'].schema;
    expect(Object.keys(properties!)).toEqual(
      expect.arrayContaining(['name', 'pixelSize_m', 'tracer', 'channel']),
    );
  });
});

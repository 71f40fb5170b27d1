import { z } from 'zod';
import { HTTP, type RouteSpec } from '@shared/contract/http';
import { PATHS, type RouteName } from '@shared/contract/paths';
import { Problem } from '@shared/contract/problem';

/** The OpenAPI 3.1 description of the whole contract, made from the same table that serves it. */
export function openApi(publicUrl: string): object {
  const paths: Record<string, Record<string, object>> = {};
  for (const name of Object.keys(PATHS) as RouteName[]) {
    const [method, path] = PATHS[name];
    const item = (paths[path.replace(/:(\w+)/g, '{$1}')] ??= {});
    item[method.toLowerCase()] = operation(name, path, HTTP[name]);
  }
  return {
    openapi: '3.1.0',
    info: {
      title: 'Thawline',
      version: '0.1.0',
      description:
        'Moments are milliseconds since 1970-01-01T00:00:00Z. Every change carries a `commandId` made by the client; the same id again changes nothing.',
      license: { name: 'Proprietary' },
    },
    servers: [{ url: publicUrl }],
    paths,
    components: {
      schemas: { Problem: schemaOf(Problem, 'output') },
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: 'thawline' },
      },
    },
  };
}

function operation(name: string, path: string, spec: RouteSpec): object {
  const inPath = [...path.matchAll(/:(\w+)/g)].map(([, parameter]) => ({
    name: parameter,
    in: 'path',
    required: true,
    schema: { type: 'string', format: 'uuid' },
  }));
  return {
    operationId: name,
    summary: spec.summary,
    description: spec.who === 'anyone' ? 'For anyone.' : `For: ${spec.who.join(', ')}.`,
    ...(spec.who === 'anyone' ? { security: [] } : { security: [{ session: [] }] }),
    parameters: [...inPath, ...queryParameters(spec.query)],
    ...(spec.body ? { requestBody: requestBody(spec.body) } : {}),
    responses: {
      [String(spec.status ?? 200)]: {
        description: 'Done',
        content: { 'application/json': { schema: schemaOf(spec.reply, 'output') } },
      },
      default: {
        description: 'Refused, as RFC 9457 says it',
        content: {
          'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } },
        },
      },
    },
  };
}

function requestBody(body: z.ZodType | 'bytes' | 'stream'): object {
  return {
    required: true,
    content:
      body === 'bytes' || body === 'stream'
        ? { 'application/octet-stream': { schema: { type: 'string', format: 'binary' } } }
        : { 'application/json': { schema: schemaOf(body, 'input') } },
  };
}

function queryParameters(query: z.ZodType | undefined): object[] {
  if (!query) return [];
  const schema = schemaOf(query, 'input') as {
    properties?: Record<string, object>;
    required?: string[];
  };
  return Object.entries(schema.properties ?? {}).map(([name, property]) => ({
    name,
    in: 'query',
    required: schema.required?.includes(name) ?? false,
    schema: property,
  }));
}

function schemaOf(schema: z.ZodType, io: 'input' | 'output'): object {
  const { $schema: _, ...rest } = z.toJSONSchema(schema, {
    io,
    unrepresentable: 'any',
    reused: 'inline',
  });
  return rest;
}

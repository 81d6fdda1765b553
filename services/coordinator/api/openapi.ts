import { STATUS_CODES } from 'node:http';
import { z } from 'zod';
import { SOFTWARE } from '../../../shared/service/software.ts';
import { PROBLEM_TYPE } from './problem.ts';
import { type Answer, type ApiRoute, changesSomething } from './route.ts';
import { namedSchemas, problem } from './schemas.ts';

type Json = Readonly<Record<string, unknown>>;

/** The OpenAPI 3.1 document of the routes; its schemas are those that validate. */
export function openApiDocument(routes: readonly ApiRoute[]): Json {
  const paths: Record<string, Record<string, unknown>> = {};
  for (const route of routes) {
    paths[route.path] ??= {};
    paths[route.path][route.method.toLowerCase()] = operationOf(route);
  }
  return {
    openapi: '3.1.1',
    info: {
      title: `${SOFTWARE.name} coordinator`,
      version: SOFTWARE.version,
      description:
        'Runs of basin-wide evapotranspiration maps. Jobs are shaped like those of OGC API - Processes - Part 1: Core; ' +
        'problems are those of RFC 9457 with a code and a remedy.',
      license: { name: 'Apache-2.0', identifier: 'Apache-2.0' },
    },
    servers: [{ url: '/' }],
    paths,
    components: {
      schemas: componentSchemas(),
      responses: Object.fromEntries(
        [...new Set(routes.flatMap(problemsOf))].sort().map((status) => [`problem${status}`, problemAnswer(status)]),
      ),
      securitySchemes: { token: { type: 'http', scheme: 'bearer', description: 'The value of BASINLOOM_TOKEN' } },
    },
  };
}

/** Statuses of all problems that an operation may answer with. */
export function problemsOf(route: ApiRoute): number[] {
  const ofChanges = changesSomething(route) ? [401, 403, 413, 415] : [];
  return [...new Set([400, 421, 500, ...ofChanges, ...route.problems])].sort((a, b) => a - b);
}

function operationOf(route: ApiRoute): Json {
  const { operationId, summary, description, params, query, body, answers } = route;
  const answered = Object.entries(answers).map(([status, answer]) => [status, answerOf(status, answer)]);
  const problems = problemsOf(route).map((status) => [status, { $ref: `#/components/responses/problem${status}` }]);
  return {
    operationId,
    summary,
    ...(description && { description }),
    parameters: [...parametersOf(params, 'path'), ...parametersOf(query, 'query')],
    ...(body && { requestBody: { required: true, content: { 'application/json': { schema: schemaOf(body) } } } }),
    responses: Object.fromEntries([...answered, ...problems]),
    security: changesSomething(route) ? [{ token: [] }] : [],
  };
}

function answerOf(status: string, { description, schema, mediaType }: Answer): Json {
  const content = schema ? { schema: schemaOf(schema) } : { schema: {} };
  const location = { description: 'Address of the run', schema: { type: 'string', format: 'uri-reference' } };
  return {
    description,
    ...(status === '201' && { headers: { Location: location } }),
    content: { [mediaType ?? 'application/json']: content },
  };
}

function problemAnswer(status: number): Json {
  return {
    description: STATUS_CODES[status] ?? 'Problem',
    content: { [PROBLEM_TYPE]: { schema: schemaOf(problem) } },
  };
}

function parametersOf(schema: z.ZodObject | undefined, place: 'path' | 'query'): Json[] {
  return Object.entries(schema?.shape ?? {}).map(([name, member]) => {
    const { $schema, description, ...rest } = z.toJSONSchema(member, { override: trim });
    return {
      name,
      in: place,
      required: place === 'path',
      ...(description !== undefined && { description }),
      schema: rest,
    };
  });
}

function schemaOf(schema: z.ZodType): Json {
  const id = namedSchemas.get(schema)?.id;
  if (id === undefined) throw new Error('a schema of the API must have a name');
  return { $ref: `#/components/schemas/${id}` };
}

function componentSchemas(): Json {
  const { schemas } = z.toJSONSchema(namedSchemas, {
    uri: (id) => `#/components/schemas/${id}`,
    override: (context) => {
      // Descriptions live in the common registry, names in that of the API.
      const description = z.globalRegistry.get(context.zodSchema)?.description;
      if (description !== undefined) context.jsonSchema.description = description;
      trim(context);
    },
  });
  return Object.fromEntries(Object.entries(schemas).map(([id, { $schema, $id, ...schema }]) => [id, schema]));
}

/** Leaves out what says nothing to a reader: the largest integer, and the format date-time once more as a pattern. */
function trim({ jsonSchema }: { jsonSchema: z.core.JSONSchema.BaseSchema }): void {
  if (jsonSchema.maximum === Number.MAX_SAFE_INTEGER) delete jsonSchema.maximum;
  if (jsonSchema.format === 'date-time') delete jsonSchema.pattern;
}

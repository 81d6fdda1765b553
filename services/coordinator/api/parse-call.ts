import { z } from 'zod';
import { type JsonSchemaNode, suggestKey } from '../../../shared/contract/basin-file-schema-json.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { ApiRoute } from './route.ts';

export interface RawCall {
  readonly params: unknown;
  readonly query: unknown;
  readonly body: unknown;
}

/**
 * Parameters and body of a request as the route's schemas describe them. Unknown names are errors here too: a
 * misspelt one must not fall back to a default unseen.
 *
 * @throws BasinloomError REQUEST_KEY or REQUEST_VALUE for the first problem; the others are in its cause, an
 *   AggregateError
 */
export function parseCall({ params, query, body }: Pick<ApiRoute, 'params' | 'query' | 'body'>, raw: RawCall) {
  return {
    // Parameters of the path need no check beyond being there: no other text leads to anything.
    params: params ? parsePart(params, raw.params, 'path') : {},
    query: parsePart(query ?? NO_QUERY, raw.query, 'query'),
    body: body ? parsePart(body, raw.body, 'body') : undefined,
  };
}

const NO_QUERY = z.strictObject({});

function parsePart<S extends z.ZodType>(schema: S, value: unknown, part: string): z.output<S> {
  const parsed = schema.safeParse(value);
  if (parsed.success) return parsed.data;
  const problems = parsed.error.issues.flatMap((issue) => describe(issue, schema, part, value));
  // Unknown names first: what is missing beside one is most likely that name misspelt.
  const [first, ...others] = problems.sort((a, b) => Number(isKey(b)) - Number(isKey(a)));
  if (others.length === 0) throw first;
  const cause = new AggregateError(others, `${others.length} more`);
  throw new BasinloomError(first.code, first.parameters, { cause });
}

function isKey({ code }: BasinloomError): boolean {
  return code === 'REQUEST_KEY';
}

function describe(issue: z.core.$ZodIssue, schema: z.ZodType, part: string, value: unknown): BasinloomError[] {
  const path = issue.path as (string | number)[];
  const place = [part, ...path].join('.');
  if (issue.code === 'unrecognized_keys') {
    const node = z.toJSONSchema(schema, { io: 'input' }) as JsonSchemaNode;
    return issue.keys.map(
      (key) => new BasinloomError('REQUEST_KEY', { place, key, suggestion: suggestKey(node, path, key) }),
    );
  }
  const isMissing = issue.code === 'invalid_type' && valueAt(value, path) === undefined;
  return [new BasinloomError('REQUEST_VALUE', { place, detail: isMissing ? 'is missing' : detailOf(issue.message) })];
}

function detailOf(message: string): string {
  return message.replace(/^Invalid (input|option): /, '');
}

function valueAt(value: unknown, path: readonly (string | number)[]): unknown {
  return path.reduce<unknown>((at, segment) => (at as Record<string | number, unknown> | null)?.[segment], value);
}

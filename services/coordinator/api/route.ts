import type { FastifyReply, FastifyRequest } from 'fastify';
import type { Logger } from 'pino';
import type { z } from 'zod';
import type { Store } from '../../../shared/store/store.ts';
import type { Runs } from '../runs.ts';
import type { AllowedPlaces } from './allowed.ts';
import type { EventStreams } from './event-stream.ts';

/** What the handlers work with. */
export interface ApiParts {
  readonly runs: Runs;
  readonly allowed: AllowedPlaces;
  readonly streams: EventStreams;
  readonly openStore: (location: string) => Store;
  /** The OpenAPI document. */
  readonly document: object;
  readonly log: Logger;
}

export interface Answer {
  readonly description: string;
  /** A named schema, for JSON. */
  readonly schema?: z.ZodType;
  /** Where it is not application/json. */
  readonly mediaType?: string;
}

export interface Call<P, Q, B> {
  readonly params: P;
  readonly query: Q;
  readonly body: B;
  readonly api: ApiParts;
  readonly request: FastifyRequest;
  readonly reply: FastifyReply;
}

/** One operation: what the server does and what the OpenAPI document says come from the same entry. */
export interface ApiRoute<
  P extends z.ZodObject = z.ZodObject,
  Q extends z.ZodObject = z.ZodObject,
  B extends z.ZodType = z.ZodType,
> {
  /** All but GET change something, and need the token. */
  readonly method: 'GET' | 'POST' | 'DELETE';
  /** With parameters in braces: `/jobs/{jobID}`. */
  readonly path: string;
  readonly operationId: string;
  readonly summary: string;
  readonly description?: string;
  readonly params?: P;
  readonly query?: Q;
  readonly body?: B;
  /** The answer when all goes well, by status. */
  readonly answers: Readonly<Record<number, Answer>>;
  /** Statuses of the problems that are this operation's own. */
  readonly problems: readonly number[];
  handle(call: Call<z.output<P>, z.output<Q>, z.output<B>>): Promise<unknown>;
}

/** An entry with the types of its parameters checked, then forgotten: parseCall gives them what they say. */
export function route<P extends z.ZodObject, Q extends z.ZodObject, B extends z.ZodType>(
  entry: ApiRoute<P, Q, B>,
): ApiRoute {
  return entry as unknown as ApiRoute;
}

export function changesSomething({ method }: Pick<ApiRoute, 'method'>): boolean {
  return method !== 'GET';
}

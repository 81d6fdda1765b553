import { availableParallelism } from 'node:os';
import { z } from 'zod';
import { BasinloomError } from '../contract/errors.ts';

/** Variables of every service: the one table behind validation and docs/reference/services.md. */
export const sharedVariables = {
  BASINLOOM_REDIS_URL: z.string().min(1).describe('redis://host:port/database, or rediss:// for TLS'),
  BASINLOOM_REDIS_USERNAME: z.string().optional().describe('User of Redis, where it has users'),
  BASINLOOM_REDIS_PASSWORD: z.string().optional().describe('Password of Redis'),
  BASINLOOM_LOG_LEVEL: z
    .enum(['debug', 'info', 'warn', 'error'])
    .default('info')
    .describe('Least weight of a line that is logged'),
  BASINLOOM_STOP_SECONDS: z.coerce
    .number()
    .min(0)
    .default(25)
    .describe('How long SIGTERM lets the work in hand finish before it is given back, s'),
  BASINLOOM_HEALTH_HOST: z.string().default('127.0.0.1').describe('Address of /livez, /readyz and /metrics'),
};

const list = (separator: string) =>
  z
    .string()
    .default('')
    .transform((text) =>
      text
        .split(separator)
        .map((item) => item.trim())
        .filter(Boolean),
    );
const port = (fallback: number) => z.coerce.number().int().min(0).max(65_535).default(fallback);

/** Variables of the services that take jobs from the queue. */
export const jobServiceVariables = {
  ...sharedVariables,
  BASINLOOM_THREADS: z.coerce
    .number()
    .int()
    .min(1)
    .max(256)
    .default(availableParallelism())
    .describe('Jobs at a time; default: all processors'),
  BASINLOOM_LOCK_SECONDS: z.coerce
    .number()
    .min(1)
    .default(30)
    .describe('A process silent for longer is taken for dead, and its jobs are given to others, s'),
};

/** Variables of the coordinator. */
export const coordinatorVariables = {
  ...sharedVariables,
  BASINLOOM_HOME: z
    .string()
    .default('./coordinator')
    .describe('Folder or s3://bucket/prefix where the coordinator remembers its runs and schedules'),
  BASINLOOM_HTTP_HOST: z.string().default('127.0.0.1').describe('Address of the HTTP API'),
  BASINLOOM_HTTP_PORT: port(8080).describe('Port of the HTTP API; 0 takes any free one'),
  BASINLOOM_TOKEN: z
    .string()
    .min(16, 'must have 16 characters or more')
    .optional()
    .describe('Bearer token for requests that change something; without it such requests are refused'),
  BASINLOOM_ROOTS: list(':').describe('Folders that basin files, their inputs and outputs lie in, parted by ":"'),
  BASINLOOM_URLS: list(',').describe('URL prefixes that a basin file may name, parted by ","'),
};

export const healthPort = (fallback: number) => ({
  BASINLOOM_HEALTH_PORT: port(fallback).describe('Port of /livez, /readyz and /metrics; 0 takes any free one'),
});

/**
 * The variables of a service from the environment.
 *
 * @throws BasinloomError ENVIRONMENT naming the variable
 */
export function readEnvironment<Shape extends z.ZodRawShape>(
  shape: Shape,
  environment: Readonly<Record<string, string | undefined>>,
): z.output<z.ZodObject<Shape>> {
  // An empty variable is one that is not set: that is how compose files leave one out.
  const given = Object.fromEntries(Object.entries(environment).filter(([, value]) => value !== ''));
  const parsed = z.object(shape).safeParse(given);
  if (parsed.success) return parsed.data;
  const [issue] = parsed.error.issues;
  const name = String(issue.path[0] ?? '');
  const detail = name in given ? issue.message : 'it is not set';
  throw new BasinloomError('ENVIRONMENT', { name, detail });
}

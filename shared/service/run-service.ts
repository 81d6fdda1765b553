import type { Logger } from 'pino';
import type { z } from 'zod';
import { BasinloomError } from '../contract/errors.ts';
import { readEnvironment } from './environment.ts';
import { serviceLogger } from './logger.ts';
import { stopRequested } from './stop.ts';

/** A service that has started. */
export interface RunningService {
  /** What the line that says "ready" tells besides. */
  readonly details: Readonly<Record<string, unknown>>;
  /** Lets the work in hand finish, or gives it back, and lets go of everything. */
  close(): Promise<void>;
}

/**
 * The whole life of a service: reads its environment, starts, serves until SIGTERM or SIGINT, closes.
 *
 * @param variables of its environment
 * @returns the exit code: 0 after a stop that was asked for, else that of the error, which stands in the log
 */
export async function runService<Shape extends z.ZodRawShape & { BASINLOOM_LOG_LEVEL: z.ZodType<string> }>(
  name: string,
  variables: Shape,
  start: (environment: z.output<z.ZodObject<Shape>>, log: Logger) => Promise<RunningService>,
): Promise<number> {
  const stop = stopRequested();
  let log = serviceLogger(name, 'info');
  try {
    const environment = readEnvironment(variables, process.env);
    log = serviceLogger(name, (environment as { BASINLOOM_LOG_LEVEL: string }).BASINLOOM_LOG_LEVEL);
    const service = await start(environment, log);
    log.info(service.details, 'ready');
    log.info({ signal: await stop }, 'stopping');
    await service.close();
    log.info('stopped');
    return 0;
  } catch (thrown) {
    const error = BasinloomError.from(thrown);
    log.fatal({ error: error.toRecord() }, error.message);
    return error.entry.exit;
  }
}

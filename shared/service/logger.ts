import { type DestinationStream, type Logger, pino } from 'pino';

/** The log of a service: one JSON line an event on stdout, without the secrets that settings may hold. */
export function serviceLogger(service: string, level: string, to: DestinationStream = pino.destination(1)): Logger {
  return pino(
    {
      level,
      base: { service, pid: process.pid },
      timestamp: pino.stdTimeFunctions.isoTime,
      redact: { paths: ['password', 'token', 'authorization', '*.password', '*.token', '*.authorization'] },
    },
    to,
  );
}

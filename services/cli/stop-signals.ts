import { EXIT } from '../../shared/contract/exit-codes.ts';

export interface StopSignals {
  readonly signal: AbortSignal;
  /** Exit code of the signal that came, if one did. */
  exitCode(): number | undefined;
  dispose(): void;
}

/** First Ctrl-C or SIGTERM: finish the jobs in hand and stop. Second: leave at once (nothing half-written stays). */
export function stopSignals(say: (message: string) => void): StopSignals {
  const controller = new AbortController();
  let exitCode: number | undefined;
  const stop = (name: NodeJS.Signals) => {
    const code = name === 'SIGTERM' ? EXIT.terminated : EXIT.interrupted;
    if (controller.signal.aborted) process.exit(code);
    exitCode = code;
    say('stopping after the jobs in hand; once more to leave at once');
    controller.abort();
  };
  process.on('SIGINT', stop);
  process.on('SIGTERM', stop);
  return {
    signal: controller.signal,
    exitCode: () => exitCode,
    dispose() {
      process.off('SIGINT', stop);
      process.off('SIGTERM', stop);
    },
  };
}

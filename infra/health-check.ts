/** The image's HEALTHCHECK: ends with 0 while the service in this container takes work, else with 1. */
const port = process.env.BASINLOOM_HEALTH_PORT;
const isReady = await fetch(`http://127.0.0.1:${port}/readyz`, { signal: AbortSignal.timeout(4000) }).then(
  ({ ok }) => ok,
  () => false,
);
process.exitCode = isReady ? 0 : 1;

export {};

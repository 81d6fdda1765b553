/** Port of each service's /livez, /readyz and /metrics. */
export const HEALTH_PORTS = { coordinator: 9100, worker: 9101, mosaicker: 9102 } as const;

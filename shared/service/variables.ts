import { coordinatorVariables, healthPort, jobServiceVariables } from './environment.ts';
import { HEALTH_PORTS } from './ports.ts';

export type ServiceProcess = keyof typeof HEALTH_PORTS;

/** Every variable that each service reads. */
export const SERVICE_VARIABLES = {
  coordinator: { ...coordinatorVariables, ...healthPort(HEALTH_PORTS.coordinator) },
  worker: { ...jobServiceVariables, ...healthPort(HEALTH_PORTS.worker) },
  mosaicker: { ...jobServiceVariables, ...healthPort(HEALTH_PORTS.mosaicker) },
} as const;

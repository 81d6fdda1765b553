import type { MethodName } from '../../contract/calibration.ts';
import type { Method } from './method.ts';
import { metric } from './metric.ts';
import { sebal } from './sebal.ts';

/** Every method of the house by its name in the basin file. */
export const METHODS: Readonly<Record<MethodName, Method>> = { metric, sebal };

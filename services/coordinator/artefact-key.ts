import { createHash } from 'node:crypto';
import type { Stage } from '../../shared/contract/jobs.ts';

/**
 * Version of what each stage computes. Raise it with every change that changes an artefact's content: old
 * artefacts are then no longer found, and their work is done again.
 */
const STAGE_VERSION: Readonly<Record<Stage | 'plan' | 'calibration' | 'tiles', number>> = {
  plan: 1,
  terrain: 1,
  prepare: 1,
  calibration: 1,
  flux: 1,
  overlap: 1,
  day: 1,
  integrate: 1,
  tiles: 1,
  tally: 1,
  mosaic: 1,
  publish: 1,
};

/** Name of an artefact: the hash of everything that determines its content. */
export function artefactKey(stage: keyof typeof STAGE_VERSION, identity: unknown, suffix = ''): string {
  const hash = digest([stage, STAGE_VERSION[stage], identity]);
  return `artefacts/${stage}/${hash.slice(0, 2)}/${hash}${suffix}`;
}

/** Hash of a value: equal values, equal text. */
export function digest(value: unknown): string {
  return createHash('sha256').update(canonicalJson(value)).digest('hex').slice(0, 40);
}

/** JSON with sorted keys, so that equal values give equal text. */
export function canonicalJson(value: unknown): string {
  return JSON.stringify(value, (_key, inner: unknown) => {
    if (inner === null || typeof inner !== 'object' || Array.isArray(inner)) return inner;
    return Object.fromEntries(Object.entries(inner).sort(([a], [b]) => (a < b ? -1 : 1)));
  });
}

import type { PassRecord } from '../contract/scene.ts';

/** Name of the swath that a pass belongs to: path and satellite, sortable. */
export function swathName({ path, satellite }: PassRecord): string {
  return `${String(path).padStart(3, '0')} ${satellite}`;
}

/** Swaths of a set of passes in a fixed order: bit k of a swath plane stands for the k-th. */
export function swathsOf(passes: readonly PassRecord[]): string[] {
  return [...new Set(passes.map(swathName))].sort();
}

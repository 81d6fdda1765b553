import type { TerrainJob } from '../../../shared/contract/jobs.ts';

/** Jobs with keys and ids as long as real ones. */
export function* noopJobs(count: number): Generator<TerrainJob> {
  for (let tile = 0; tile < count; tile++) {
    const name = String(tile).padStart(40, '0');
    yield {
      stage: 'terrain',
      id: `2025-06-14-landsat8-p033-r${name.slice(-8)}`,
      planKey: `artefacts/plan/00/${'0'.repeat(40)}.json`,
      outputKey: `artefacts/terrain/${name.slice(-2)}/${name}`,
      tile,
    };
  }
}

import type { SceneRecord } from '../contract/scene.ts';

/** A scene that a newer processing of the same image replaces. */
export interface SupersededScene {
  readonly scene: SceneRecord;
  readonly by: SceneRecord;
}

/** Tiers of Landsat Collection 2: RT is preliminary and replaced by T1 or T2. */
const TIERS = ['RT', 'T2', 'T1'];

/** Product identifiers: sensor, level, path and row, date, date of processing, collection, tier. */
const PRODUCT_ID = /^\w{4}_\w{4}_\d{6}_\d{8}_(\d{8})_\d{2}_(RT|T1|T2)/;

/**
 * Of scenes with the same satellite, path, row and overpass, the newest processing; within one date of processing the
 * better tier. The outcome does not depend on the order given.
 *
 * @param overpass scenes of one overpass
 */
export function keepNewestProcessing(overpass: readonly SceneRecord[]): {
  readonly kept: SceneRecord[];
  readonly superseded: SupersededScene[];
} {
  const byRow = Map.groupBy(overpass, ({ row }) => row);
  const kept: SceneRecord[] = [];
  const superseded: SupersededScene[] = [];
  for (const row of [...byRow.keys()].sort((a, b) => a - b)) {
    const [newest, ...others] = byRow.get(row)!.sort(newestFirst);
    kept.push(newest);
    superseded.push(...others.map((scene) => ({ scene, by: newest })));
  }
  return { kept, superseded };
}

function newestFirst(a: SceneRecord, b: SceneRecord): number {
  const [ofA, ofB] = [processingKey(a), processingKey(b)];
  return ofA === ofB ? 0 : ofA < ofB ? 1 : -1;
}

/** Sorts by date of processing, tier, identifier; equal copies by the place of their metadata. */
function processingKey({ id, metadataFile }: SceneRecord): string {
  const [, processed = '', tier = ''] = PRODUCT_ID.exec(id) ?? [];
  return [processed, TIERS.indexOf(tier) + 1, id, metadataFile].join(' ');
}

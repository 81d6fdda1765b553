import { isRecord } from '../../contract/is-record.ts';

/** A value of an MTL file, as text without its quotes. */
export interface MtlValue {
  readonly text: string;
  /** Line in the file, where its form has lines. */
  readonly line?: number;
}

/** Groups of an MTL file by name, each with its values by key. Groups do not nest further than this. */
export type MtlRecord = ReadonlyMap<string, ReadonlyMap<string, MtlValue>>;

/** The file cannot be read as an MTL file; `place` says where. */
export class MtlSyntaxError extends Error {
  readonly place: string;

  constructor(place: string, detail: string) {
    super(detail);
    this.name = 'MtlSyntaxError';
    this.place = place;
  }
}

/** Name of the group around all others in Collection 2. */
export const ROOT_GROUP = 'LANDSAT_METADATA_FILE';

/** The record of a tree of groups, as the JSON and XML forms hold it. @throws MtlSyntaxError */
export function recordOfTree(tree: unknown): MtlRecord {
  const root = isRecord(tree) ? tree[ROOT_GROUP] : undefined;
  if (!isRecord(root)) throw new MtlSyntaxError('file', `it has no group ${ROOT_GROUP}: not a Collection 2 MTL file`);
  const record = new Map<string, Map<string, MtlValue>>();
  for (const [name, group] of Object.entries(root)) {
    if (!isRecord(group)) continue;
    const values = Object.entries(group).map(([key, value]): [string, MtlValue] => {
      if (typeof value === 'string' || typeof value === 'number') return [key, { text: String(value) }];
      throw new MtlSyntaxError(`${name}/${key}`, 'it is not a single value');
    });
    record.set(name, new Map(values));
  }
  return record;
}

import { type MtlRecord, MtlSyntaxError, recordOfTree } from './mtl-record.ts';

/** Reads the JSON form of an MTL file. @throws MtlSyntaxError */
export function parseMtlJson(text: string): MtlRecord {
  let tree: unknown;
  try {
    tree = JSON.parse(text);
  } catch (error) {
    throw new MtlSyntaxError('file', `not valid JSON: ${(error as Error).message}`);
  }
  return recordOfTree(tree);
}

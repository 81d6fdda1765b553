import { createHash } from 'node:crypto';
import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { parse } from 'csv-parse/sync';
import { fromFile } from 'geotiff';

/** Relative paths of the files below a folder, sorted. */
export async function filesBelow(folder: string, keep: (path: string) => boolean = () => true): Promise<string[]> {
  const entries = await readdir(folder, { recursive: true, withFileTypes: true });
  return entries
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name).slice(folder.length + 1))
    .filter(keep)
    .sort();
}

export async function sha256(file: string): Promise<string> {
  return createHash('sha256')
    .update(await readFile(file))
    .digest('hex');
}

/** Hash of every file below a folder, by relative path. */
export async function hashesBelow(folder: string, keep?: (path: string) => boolean): Promise<Record<string, string>> {
  const files = await filesBelow(folder, keep);
  return Object.fromEntries(await Promise.all(files.map(async (file) => [file, await sha256(join(folder, file))])));
}

/**
 * Hash of the pixels of every resolution level of a TIFF, read by a library that is not ours: equal for equal
 * pixels, whatever the block size of the file.
 */
export async function pixelHashes(file: string): Promise<string[]> {
  const tiff = await fromFile(file);
  const levels: string[] = [];
  for (let index = 0; index < (await tiff.getImageCount()); index++) {
    const image = await tiff.getImage(index);
    const [samples] = (await image.readRasters()) as unknown as Uint8Array[];
    const bytes = new Uint8Array(samples.buffer, samples.byteOffset, samples.byteLength);
    const size = `${image.getWidth()}x${image.getHeight()}`;
    levels.push(`${size} ${createHash('sha256').update(bytes).digest('hex')}`);
  }
  tiff.close();
  return levels;
}

/** Rows of a CSV file with plain cells, by column name. */
export async function readCsv(file: string): Promise<Record<string, string>[]> {
  return parse(await readFile(file, 'utf8'), { columns: true, skip_empty_lines: true });
}

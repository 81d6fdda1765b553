import { readFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import { parseBasinFile } from '../../shared/contract/parse-basin-file.ts';

/**
 * Reads a basin file and makes its paths absolute: paths in it are relative to it, `out` to where the command was
 * called. URLs stay as they are.
 */
export async function loadBasin(
  file: string,
  options: { readonly set?: Readonly<Record<string, string>>; readonly out?: string } = {},
): Promise<BasinFile> {
  const text = await readFile(file, 'utf8').catch((cause) => {
    throw new BasinloomError('BASIN_FILE_MISSING', { file }, { cause });
  });
  const basin = parseBasinFile(text, file, options.set ?? {});
  const absolute = (path: string) => (isUrl(path) ? path : resolve(dirname(resolve(file)), path));
  return {
    ...basin,
    region: {
      ...basin.region,
      boundary: absolute(basin.region.boundary),
      ...(basin.region.zones !== undefined && { zones: absolute(basin.region.zones) }),
    },
    scenes: basin.scenes.map((source) => ({ ...source, path: absolute(source.path) })),
    weather: basin.weather.map((source) => ({ ...source, path: absolute(source.path) })),
    ...(basin.terrain !== undefined && { terrain: absolute(basin.terrain) }),
    ...(basin.landcover && {
      landcover: { path: absolute(basin.landcover.path), classes: absolute(basin.landcover.classes) },
    }),
    store: options.out ? outputOf(options.out) : absolute(basin.store),
  };
}

/** True for text that names a place by a URL (`s3://bucket/prefix`), not by a path. */
export function isUrl(text: string): boolean {
  return /^[a-z][a-z0-9+.-]*:\/\//i.test(text);
}

function outputOf(out: string): string {
  return isUrl(out) ? out : resolve(out);
}

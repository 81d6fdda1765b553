import { readFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import { parseBasinFile } from '../../shared/contract/parse-basin-file.ts';

/**
 * Reads a basin file and makes its paths absolute: paths in it are relative to it, `out` to where the command was
 * called.
 */
export async function loadBasin(
  file: string,
  options: { readonly set?: Readonly<Record<string, string>>; readonly out?: string } = {},
): Promise<BasinFile> {
  const text = await readFile(file, 'utf8').catch((cause) => {
    throw new BasinloomError('BASIN_FILE_MISSING', { file }, { cause });
  });
  const basin = parseBasinFile(text, file, options.set ?? {});
  const absolute = (path: string) => resolve(dirname(resolve(file)), path);
  const location = (store: string, of: (path: string) => string) => (/^\w+:\/\//.test(store) ? store : of(store));
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
    store: options.out ? location(options.out, resolve) : location(basin.store, absolute),
  };
}

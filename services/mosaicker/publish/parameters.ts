import { type BasinFile, basinFileSchema } from '../../../shared/contract/basin-file.ts';
import type { Parameter } from '../report/model.ts';

/** Parts of the basin file that name files: they are listed as sources, and their paths say nothing about the result. */
const NOT_PARAMETERS = /^(region|scenes|weather|terrain|landcover|store|engine|threads)\b/;

/** Every parameter of the basin file, with those that it leaves at their default marked. */
export function parameters(basin: BasinFile): Parameter[] {
  const defaults = flat(leastBasin());
  return [...flat(basin)]
    .filter(([key]) => !NOT_PARAMETERS.test(key))
    .map(([key, value]) => ({ key, value, isDefault: defaults.get(key) === value }));
}

/** A basin file that sets nothing but what it must. */
function leastBasin(): BasinFile {
  return basinFileSchema.parse({
    region: { name: '-', boundary: '-' },
    period: { from: '2000-01-01', to: '2000-01-01' },
    scenes: [{ source: 'landsat-level-2', path: '-' }],
    weather: [{ source: 'station-csv', path: '-' }],
  });
}

function flat(value: unknown, prefix = ''): Map<string, string> {
  const entries = new Map<string, string>();
  for (const [key, inner] of Object.entries(value as object)) {
    const name = prefix ? `${prefix}.${key}` : key;
    if (Array.isArray(inner)) entries.set(name, inner.join(', '));
    else if (typeof inner === 'object' && inner !== null) for (const [k, v] of flat(inner, name)) entries.set(k, v);
    else entries.set(name, String(inner));
  }
  return entries;
}

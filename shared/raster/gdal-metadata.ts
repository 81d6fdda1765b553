import type { ProductStatistics } from '../contract/mosaic-record.ts';

/** What a TIFF says about its band beside the pixels; read by GDAL from tag 42112. */
export interface TiffMetadata {
  readonly description: string;
  /** UDUNITS spelling; "1" for none. */
  readonly unit: string;
  readonly scale: number;
  readonly offset: number;
  readonly statistics?: Omit<ProductStatistics, 'count' | 'outOfBounds'>;
  /** Further items of the whole file, in this order. */
  readonly items: Readonly<Record<string, string>>;
}

/**
 * The XML of GDAL's metadata tag. GDAL's statistics are of stored values, so those of the product's unit are carried
 * back by scale and offset.
 */
export function gdalMetadataXml({ description, unit, scale, offset, statistics, items }: TiffMetadata): string {
  const lines = Object.entries(items)
    // The pixel-is-area key says it already; as an item GDAL would list it twice.
    .filter(([name]) => name !== 'AREA_OR_POINT')
    .map(([name, value]) => `<Item name="${escapedOnce(name)}">${escaped(value)}</Item>`);
  const band = (name: string, value: string | number, role?: string) =>
    lines.push(`<Item name="${name}" sample="0"${role ? ` role="${role}"` : ''}>${escaped(String(value))}</Item>`);
  if (statistics) {
    const stored = (value: number) => (value - offset) / scale;
    band('STATISTICS_MINIMUM', rounded(stored(statistics.minimum)));
    band('STATISTICS_MAXIMUM', rounded(stored(statistics.maximum)));
    band('STATISTICS_MEAN', rounded(stored(statistics.mean)));
    band('STATISTICS_STDDEV', rounded(statistics.standardDeviation / scale));
    band('STATISTICS_VALID_PERCENT', rounded(statistics.validPercent));
  }
  band('OFFSET', offset, 'offset');
  band('SCALE', scale, 'scale');
  band('UNITTYPE', unit, 'unittype');
  band('DESCRIPTION', description, 'description');
  return `<GDALMetadata>\n${lines.map((line) => `  ${line}\n`).join('')}</GDALMetadata>\n`;
}

/** Ten digits are more than the statistics are worth, and hide the last bits of the carrying back. */
function rounded(value: number): number {
  return Number(value.toPrecision(10));
}

const ENTITIES: Readonly<Record<string, string>> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };

const escapedOnce = (text: string) => text.replace(/[&<>"]/g, (character) => ENTITIES[character]);

/** GDAL unescapes values twice: as XML, and once more on its own. */
function escaped(text: string): string {
  return escapedOnce(escapedOnce(text));
}

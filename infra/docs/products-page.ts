import { ALWAYS_PUBLISHED, PRODUCTS, type ProductEntry, type ProductName } from '../../shared/contract/products.ts';
import { code, page, table } from './markdown.ts';

/** docs/reference/products.md. */
export function productsPage(): string {
  const entries = Object.entries(PRODUCTS) as [ProductName, ProductEntry][];
  return page('Products', [
    'Products are Cloud Optimized GeoTIFFs of one band, `products/<date or period>/<product>.tif`, beside a STAC item. ' +
      'The physical value is stored value x scale + offset; scale, offset, unit and nodata also stand in the file.',
    `Choose them with the key ${code('products')} of the basin file. ${listed(ALWAYS_PUBLISHED)} are always published: ` +
      'a map without them cannot be judged.',
    table(
      ['Product', 'Stands for', 'Unit', 'Stored as', 'Scale', 'Offset', 'Nodata', 'Plausible', 'CF standard name'],
      entries.map(([name, entry]) => [
        code(name),
        entry.per,
        entry.unit,
        entry.storage,
        String(entry.scale),
        String(entry.offset),
        entry.nodata === null ? 'none' : String(entry.nodata),
        entry.bounds ? `${entry.bounds[0]} to ${entry.bounds[1]}` : '',
        entry.standardName ? code(entry.standardName) : '',
      ]),
    ),
    'Values outside the plausible range are kept and counted in the report.',
    entries.map(([name, { title, description }]) => `- ${code(name)}: ${title}. ${description}.`).join('\n'),
  ]);
}

function listed(names: readonly string[]): string {
  return `${names.slice(0, -1).map(code).join(', ')} and ${code(names.at(-1) ?? '')}`;
}

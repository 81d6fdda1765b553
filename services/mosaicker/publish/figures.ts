import type { MosaicRecord } from '../../../shared/contract/mosaic-record.ts';
import type { PixelPolygons } from '../../../shared/contract/plan.ts';
import { PRODUCTS, type ProductEntry, type ProductName } from '../../../shared/contract/products.ts';
import { indexEdges, polygonCoverage } from '../../../shared/region/coverage.ts';
import type { MosaickerContext } from '../context.ts';
import { outlinePath } from '../outlines.ts';
import { mapPng, mapStyle } from '../pictures.ts';
import type { LoadedLayer, Publication } from '../publish.ts';
import type { MapFigure } from '../report/model.ts';

/** Map pictures of some products of some layers, drawn from the previews of their mosaics. */
export async function figures(
  publication: Publication,
  layers: readonly LoadedLayer[],
  products: readonly ProductName[],
  context: MosaickerContext,
): Promise<MapFigure[]> {
  const spreads = new Map<ProductName, readonly [number, number]>();
  for (const product of products) spreads.set(product, commonSpread(layers, product));
  const drawn: MapFigure[] = [];
  for (const product of products) {
    for (const layer of layers) {
      const record = layer.records[product];
      const spread = spreads.get(product);
      if (record?.statistics && spread) drawn.push(await figure(publication, layer, record, spread, context));
    }
  }
  return drawn;
}

/** One range for all layers of a product, so that their colours can be compared. */
function commonSpread(layers: readonly LoadedLayer[], product: ProductName): readonly [number, number] {
  const statistics = layers.flatMap(({ records }) => records[product]?.statistics ?? []);
  const low = Math.min(...statistics.map(({ mean, standardDeviation }) => mean - 2 * standardDeviation));
  const high = Math.max(...statistics.map(({ mean, standardDeviation }) => mean + 2 * standardDeviation));
  return [low, high];
}

async function figure(
  { plan }: Publication,
  layer: LoadedLayer,
  record: MosaicRecord,
  spread: readonly [number, number],
  context: MosaickerContext,
): Promise<MapFigure> {
  const { product, preview } = record;
  const { rows, columns, factor } = preview;
  const entry: ProductEntry = PRODUCTS[product];
  const { planes } = await context.planes(preview.key);
  const inside = insideMask(plan.boundary, rows, columns, factor);
  const values = Float32Array.from(planes.values, (stored: number) =>
    stored === entry.nodata ? Number.NaN : stored * entry.scale + entry.offset,
  );
  let [sum, valid, region] = [0, 0, 0];
  for (let i = 0; i < values.length; i++) {
    if (!inside[i]) continue;
    region++;
    if (Number.isNaN(values[i])) continue;
    valid++;
    sum += values[i];
  }
  const style = mapStyle(product, spread);
  const { tally } = layer;
  const frame = { row: 0, column: 0, pixelsPerRow: factor, pixelsPerColumn: factor };
  return {
    product,
    when: layer.when,
    png: await mapPng({ width: columns, height: rows, values, range: style.range, palette: style.palette, inside }),
    width: columns,
    height: rows,
    style,
    outlines: [
      { kind: 'boundary', name: plan.basin.region.name, path: outlinePath(plan.boundary, frame) },
      ...plan.zones.map(({ name, polygons }) => ({ kind: 'zone' as const, name, path: outlinePath(polygons, frame) })),
    ],
    metresPerPixel: plan.grid.resolution * factor,
    validFraction: tally.quality.regionPixels > 0 ? tally.quality.usable / tally.quality.regionPixels : valid / region,
    mean: sum / valid,
    ...(layer.per === 'day' && { passes: layer.passes }),
  };
}

function insideMask(boundary: PixelPolygons, rows: number, columns: number, factor: number): Uint8Array {
  const scaled = boundary.map((polygon) =>
    polygon.map((ring) => ring.map(([x, y]) => [x / factor, y / factor] as const)),
  );
  const { share } = polygonCoverage(indexEdges(scaled), { row: 0, column: 0, rows, columns });
  return Uint8Array.from(share, (value) => (value >= 0.5 ? 1 : 0));
}

import type { MosaicRecord } from '../../../shared/contract/mosaic-record.ts';
import type { PixelPolygons } from '../../../shared/contract/plan.ts';
import { PRODUCTS, type ProductEntry, type ProductName } from '../../../shared/contract/products.ts';
import { physicalValues } from '../../../shared/raster/physical.ts';
import { filled } from '../../../shared/raster/sample-type.ts';
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
  const drawn: MapFigure[] = [];
  let ground: Ground | undefined;
  for (const product of products) {
    const spread = commonSpread(layers, product);
    for (const layer of layers) {
      const record = layer.records[product];
      if (!record?.statistics) continue;
      // One grid, and so one size of preview.
      ground ??= groundOf(publication, record);
      drawn.push(await figure(layer, record, spread, ground, context));
    }
  }
  return drawn;
}

/** What all pictures of a run share. */
interface Ground {
  /** 1 for the picture's pixels that lie in the region. */
  readonly inside: Uint8Array;
  readonly outlines: MapFigure['outlines'];
  readonly metresPerPixel: number;
}

function groundOf({ plan }: Publication, { preview: { rows, columns, factor } }: MosaicRecord): Ground {
  const frame = { row: 0, column: 0, pixelsPerRow: factor, pixelsPerColumn: factor };
  return {
    inside: insideMask(plan.boundary, rows, columns, factor),
    outlines: [
      { kind: 'boundary', name: plan.basin.region.name, path: outlinePath(plan.boundary, frame) },
      ...plan.zones.map(({ name, polygons }) => ({ kind: 'zone' as const, name, path: outlinePath(polygons, frame) })),
    ],
    metresPerPixel: plan.grid.resolution * factor,
  };
}

/** One range for all layers of a product, so that their colours can be compared. */
function commonSpread(layers: readonly LoadedLayer[], product: ProductName): readonly [number, number] {
  const statistics = layers.flatMap(({ records }) => records[product]?.statistics ?? []);
  const low = Math.min(...statistics.map(({ mean, standardDeviation }) => mean - 2 * standardDeviation));
  const high = Math.max(...statistics.map(({ mean, standardDeviation }) => mean + 2 * standardDeviation));
  return [low, high];
}

async function figure(
  layer: LoadedLayer,
  record: MosaicRecord,
  spread: readonly [number, number],
  { inside, outlines, metresPerPixel }: Ground,
  context: MosaickerContext,
): Promise<MapFigure> {
  const { product, preview } = record;
  const { rows: height, columns: width } = preview;
  const { scale, offset, nodata }: ProductEntry = PRODUCTS[product];
  const { planes } = await context.planes(preview.key);
  const values = physicalValues(planes.values, { scale, offset, fill: nodata });
  let [sum, valid, region] = [0, 0, 0];
  for (let i = 0; i < values.length; i++) {
    if (!inside[i]) continue;
    region++;
    if (Number.isNaN(values[i])) continue;
    valid++;
    sum += values[i];
  }
  const style = mapStyle(product, spread);
  const { regionPixels, usable } = layer.tally.quality;
  return {
    product,
    when: layer.when,
    png: await mapPng({ width, height, values, range: style.range, palette: style.palette, inside }),
    width,
    height,
    style,
    outlines,
    metresPerPixel,
    validFraction: regionPixels > 0 ? usable / regionPixels : valid / region,
    mean: sum / valid,
    ...(layer.per === 'day' && { passes: layer.passes }),
  };
}

function insideMask(boundary: PixelPolygons, rows: number, columns: number, factor: number): Uint8Array {
  const scaled = boundary.map((polygon) =>
    polygon.map((ring) => ring.map(([x, y]) => [x / factor, y / factor] as const)),
  );
  const { share } = polygonCoverage(indexEdges(scaled), { row: 0, column: 0, rows, columns });
  return filled(new Uint8Array(share.length), share, (value) => (value >= 0.5 ? 1 : 0));
}

import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { MONTHS, PERIOD } from './calendar.ts';
import { emptyPlace } from './land.ts';
import type { Ring, SubBasin } from './outline.ts';
import { toDegrees } from './plane.ts';
import { planeCoordinates } from './plane-raster.ts';
import { PIXEL, utmProjection } from './scene-grid.ts';
import { writeTiff } from './tiff-writer.ts';
import type { World } from './world.ts';
import type { TruthMaps } from './zone-truth.ts';

/** Land-cover classes of the demo, by code. */
const CLASSES = [
  [10, 'Cropland', 1],
  [20, 'Grassland', 0],
  [30, 'Woodland', 0],
  [40, 'Water', 0],
] as const;

const polygon = (name: string, ring: Ring) => ({
  type: 'Feature',
  properties: { name },
  geometry: { type: 'Polygon', coordinates: [ring] },
});

/** Boundary and sub-basins as GeoJSON (RFC 7946). */
export async function writeOutlines(
  folder: string,
  name: string,
  boundary: Ring,
  subBasins: readonly SubBasin[],
): Promise<void> {
  const collection = (features: readonly object[]) => `${JSON.stringify({ type: 'FeatureCollection', features })}\n`;
  await writeFile(join(folder, 'basin.geojson'), collection([polygon(name, boundary)]));
  const zones = subBasins.map((zone) => polygon(zone.name, zone.ring));
  await writeFile(join(folder, 'subbasins.geojson'), collection(zones));
}

/** Ground around the basin that elevation and land cover reach beyond the scenes, m. */
const BEYOND = 600;
const DEM_ZONE = 33;

/** Elevation on a UTM grid, m, rounded to centimetres. */
export async function writeElevation(folder: string, world: World): Promise<void> {
  const { forward, inverse } = utmProjection(DEM_ZONE);
  const halfWidth = world.scale.halfWidth + world.scale.margin + BEYOND;
  const halfHeight = world.scale.halfHeight + world.scale.margin + BEYOND;
  const corners = [-1, 1].flatMap((u) => [-1, 1].map((v) => forward(toDegrees(u * halfWidth, v * halfHeight))));
  const left = Math.floor(Math.min(...corners.map(([e]) => e)) / PIXEL) * PIXEL;
  const top = Math.ceil(Math.max(...corners.map(([, n]) => n)) / PIXEL) * PIXEL;
  const width = Math.ceil((Math.max(...corners.map(([e]) => e)) - left) / PIXEL);
  const height = Math.ceil((top - Math.min(...corners.map(([, n]) => n))) / PIXEL);
  const { x, y } = planeCoordinates({ left, top, pixel: PIXEL, width, height }, inverse);
  const samples = Float32Array.from(x, (px, at) => Math.round(100 * world.terrain.elevation(px, y[at])) / 100);
  const pixels = { pixelWidth: PIXEL, pixelHeight: PIXEL };
  await writeTiff(join(folder, 'dem.tif'), {
    samples,
    width,
    height,
    epsg: 32600 + DEM_ZONE,
    left,
    top,
    ...pixels,
    nodata: -9999,
  });
}

/** Land cover on a grid of degrees, as global land-cover maps come, and its table of classes. */
export async function writeLandcover(folder: string, world: World): Promise<void> {
  const cell = PIXEL;
  const halfWidth = world.scale.halfWidth + world.scale.margin + BEYOND;
  const halfHeight = world.scale.halfHeight + world.scale.margin + BEYOND;
  const width = Math.ceil((2 * halfWidth) / cell);
  const height = Math.ceil((2 * halfHeight) / cell);
  const samples = new Uint8Array(width * height);
  const place = emptyPlace();
  for (let at = 0; at < samples.length; at++) {
    const x = -halfWidth + ((at % width) + 0.5) * cell;
    const y = halfHeight - (Math.floor(at / width) + 0.5) * cell;
    const { water, field, wood } = world.land.placeAt(x, y, place);
    samples[at] = water > 0.5 ? 40 : field > 0.5 ? 10 : wood > 0.5 ? 30 : 20;
  }
  await writeTiff(join(folder, 'landcover.tif'), {
    samples,
    width,
    height,
    ...inDegrees(-halfWidth, halfHeight, cell),
  });
  const rows = CLASSES.map((entry) => entry.join(','));
  await writeFile(join(folder, 'landcover.csv'), `${['code,name,agricultural', ...rows].join('\n')}\n`);
}

/** Georeference in degrees of a raster of square cells on the world's map. */
function inDegrees(west: number, north: number, cell: number) {
  const [left, top] = toDegrees(west, north);
  const [right, bottom] = toDegrees(west + cell, north - cell);
  return { epsg: 4326, left, top, pixelWidth: right - left, pixelHeight: top - bottom };
}

/** Maps of the true ET, mm, for a look; checks evaluate the world itself. */
export async function writeTruthMaps(folder: string, { cells, maps }: TruthMaps): Promise<void> {
  const { west, north, cell, columns: width, rows: height } = cells;
  const months: readonly string[] = MONTHS.map(({ id }) => id);
  for (const [key, values] of maps) {
    if (months.includes(key)) continue;
    const samples = values.map((value) => Math.round(1000 * value) / 1000);
    const name = key === 'whole' ? `et-${PERIOD.from}_${PERIOD.to}` : `et-${key}`;
    const place = inDegrees(west, north, cell);
    await writeTiff(join(folder, `${name}.tif`), { samples, width, height, ...place, nodata: Number.NaN });
  }
}

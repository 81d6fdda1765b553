import { GeoJsonReader } from './geojson.ts';
import type { Boundary, Zone } from './geometry.ts';

export type { Boundary, Polygon, Position, Ring, Zone } from './geometry.ts';

/**
 * The polygons of a GeoJSON text (RFC 7946): a Feature, a FeatureCollection or a bare geometry of Polygon,
 * MultiPolygon and GeometryCollections of these. Ring orientation is put right and repeated points are dropped;
 * everything else that the standard asks for is checked.
 *
 * @param file name for the messages
 * @throws BasinloomError BOUNDARY_INVALID, BOUNDARY_CROSSES_ITSELF
 */
export function parseBoundary(text: string, file: string): Boundary {
  const reader = new GeoJsonReader(file, 'BOUNDARY_INVALID');
  const polygons = reader.features(text).flatMap(({ geometry, place }) => reader.polygons(geometry, place));
  if (polygons.length === 0) throw reader.error('the whole file', 'it holds no polygon');
  reader.checkArea(polygons, 'the whole file');
  return { polygons };
}

/**
 * Named zones of a GeoJSON text: one for each feature, in the order of the file.
 *
 * @param file name for the messages
 * @param nameProperty property that names a zone; text or a number, not empty, no two alike
 * @throws BasinloomError ZONES_INVALID, BOUNDARY_CROSSES_ITSELF
 */
export function parseZones(text: string, file: string, nameProperty: string): Zone[] {
  const reader = new GeoJsonReader(file, 'ZONES_INVALID');
  const features = reader.features(text);
  if (features.length === 0) throw reader.error('the whole file', 'it holds no feature');
  const seen = new Map<string, string>();
  return features.map(({ geometry, properties, place }) => {
    const value = properties && Object.hasOwn(properties, nameProperty) ? properties[nameProperty] : undefined;
    const name = typeof value === 'string' || typeof value === 'number' ? String(value).trim() : '';
    if (name === '') throw reader.error(place, `property "${nameProperty}" is missing or empty`);
    const earlier = seen.get(name);
    if (earlier) throw reader.error(place, `the name "${name}" is used by ${earlier} already`);
    seen.set(name, place);
    const polygons = reader.polygons(geometry, place);
    reader.checkArea(polygons, place);
    return { name, polygons };
  });
}

import { describe, expect, it } from 'vitest';
import type { BasinloomError } from '../../../shared/contract/errors.ts';
import { parseBoundary, parseZones } from '../../../shared/region/boundary.ts';
import { signedArea } from '../../../shared/region/geometry.ts';

const SQUARE = [
  [10, 45],
  [11, 45],
  [11, 46],
  [10, 46],
  [10, 45],
];
const HOLE = [
  [10.2, 45.2],
  [10.4, 45.2],
  [10.4, 45.4],
  [10.2, 45.4],
  [10.2, 45.2],
];
const polygon = (...rings: unknown[]) => ({ type: 'Polygon', coordinates: rings });
const feature = (geometry: unknown, properties: unknown = {}) => ({ type: 'Feature', properties, geometry });
const collection = (...features: unknown[]) => ({ type: 'FeatureCollection', features });

const boundary = (value: unknown) => parseBoundary(JSON.stringify(value), 'basin.geojson');
const zones = (value: unknown) => parseZones(JSON.stringify(value), 'zones.geojson', 'name');

function errorOf(run: () => unknown): BasinloomError {
  try {
    run();
  } catch (error) {
    return error as BasinloomError;
  }
  throw new Error('nothing was thrown');
}

describe('boundary: what is read', () => {
  it('finds polygons in every form', () => {
    const multi = { type: 'MultiPolygon', coordinates: [[SQUARE], [HOLE]] };
    const mixed = { type: 'GeometryCollection', geometries: [polygon(SQUARE), multi] };
    const forms = [polygon(SQUARE), feature(polygon(SQUARE)), multi, mixed, feature(mixed)];
    expect(forms.map((form) => boundary(form).polygons.length)).toEqual([1, 1, 2, 3, 3]);
    expect(boundary(collection(...forms.map((form) => feature(polygon(SQUARE), form)))).polygons).toHaveLength(5);
  });

  it('turns outer rings counter-clockwise and holes clockwise, however they come', () => {
    for (const outer of [SQUARE, SQUARE.toReversed()]) {
      for (const hole of [HOLE, HOLE.toReversed()]) {
        const [[first, second]] = boundary(polygon(outer, hole)).polygons;
        expect(signedArea(first)).toBeCloseTo(1, 12);
        expect(signedArea(second)).toBeCloseTo(-0.04, 12);
      }
    }
  });

  it('drops repeated points, heights and collapsed parts', () => {
    const repeated = [SQUARE[0], SQUARE[0], ...SQUARE.slice(1), SQUARE[0]].map(([x, y]) => [x, y, 123]);
    expect(boundary(polygon(repeated)).polygons[0][0]).toEqual(SQUARE);
    const point = [SQUARE[0], SQUARE[0], SQUARE[0], SQUARE[0]];
    expect(boundary({ type: 'MultiPolygon', coordinates: [[SQUARE], [point]] }).polygons[0][0]).toEqual(SQUARE);
  });

  it('tolerates a spike that goes out and back', () => {
    const spiked = [...SQUARE.slice(0, 2), [12, 45.5], [11, 45], ...SQUARE.slice(2)];
    expect(boundary(polygon(spiked)).polygons[0][0]).toHaveLength(7);
  });

  it('accepts the old crs member when it names CRS84', () => {
    const crs = (name: string) => ({ type: 'name', properties: { name } });
    for (const name of ['urn:ogc:def:crs:OGC:1.3:CRS84', 'urn:ogc:def:crs:OGC::CRS84', 'OGC:CRS84']) {
      expect(boundary({ ...feature(polygon(SQUARE)), crs: crs(name) }).polygons).toHaveLength(1);
    }
    expect(boundary({ ...feature(polygon(SQUARE)), crs: null }).polygons).toHaveLength(1);
  });
});

describe('boundary: what is refused', () => {
  const cases: readonly (readonly [string, unknown, string, RegExp])[] = [
    ['a list', [], 'the whole file', /not a GeoJSON object/],
    ['an empty collection', collection(), 'the whole file', /holds no polygon/],
    ['features that are no list', { type: 'FeatureCollection' }, 'the whole file', /not a list/],
    ['a stranger in a collection', collection(polygon(SQUARE)), 'feature 1', /not a Feature/],
    ['a feature without geometry', collection(feature(polygon(SQUARE)), feature(null)), 'feature 2', /no geometry/],
    ['a line', feature({ type: 'LineString', coordinates: SQUARE }), 'the feature', /"LineString" is not a Polygon/],
    ['a polygon without rings', polygon(), 'the geometry', /no ring/],
    [
      'three positions',
      polygon([
        [10, 45],
        [11, 45],
        [10, 45],
      ]),
      'the geometry, outer ring',
      /at least 4 positions/,
    ],
    ['an open ring', polygon([...SQUARE.slice(0, 4), [10, 45.1]]), 'the geometry, outer ring', /not closed/],
    ['an open hole', polygon(SQUARE, HOLE.slice(0, 4)), 'the geometry, hole 1', /not closed/],
    ['text as a number', polygon([['10', 45], ...SQUARE]), 'the geometry, outer ring, position 1', /two numbers/],
    ['one number', polygon([...SQUARE, [7]]), 'the geometry, outer ring, position 6', /two numbers/],
    [
      'metres',
      polygon(SQUARE.map(([x, y]) => [x * 50000, y * 1e5])),
      'the geometry, outer ring, position 1',
      /looks projected, not longitude\/latitude/,
    ],
    [
      'swapped axes',
      polygon(SQUARE.map(([x, y]) => [y, x + 100])),
      'the geometry, outer ring, position 1',
      /latitude, longitude\?/,
    ],
    [
      'longitudes above 180',
      polygon(SQUARE.map(([x, y]) => [x + 185, y])),
      'the geometry, outer ring, position 1',
      /not longitude, latitude/,
    ],
    ['no area', polygon([SQUARE[0], SQUARE[1], SQUARE[2], SQUARE[1], SQUARE[0]]), 'the whole file', /encloses no area/],
  ];
  it.each(cases)('%s', (_, value, place, detail) => {
    const error = errorOf(() => boundary(value));
    expect([error.code, error.parameters.file, error.parameters.place]).toEqual([
      'BOUNDARY_INVALID',
      'basin.geojson',
      place,
    ]);
    expect(error.parameters.detail).toMatch(detail);
  });

  it('text that is no JSON', () => {
    const error = errorOf(() => parseBoundary('{"type":', 'basin.geojson'));
    expect(error.code).toBe('BOUNDARY_INVALID');
    expect(error.message).toMatch(/^basin\.geojson: the whole file: not valid JSON/);
  });

  it('numbers that JSON can write and a double cannot hold', () => {
    const text = JSON.stringify(polygon(SQUARE)).replace('11,', '1e999,');
    expect(errorOf(() => parseBoundary(text, 'basin.geojson')).parameters.detail).toMatch(/two numbers/);
  });

  it.each(['urn:ogc:def:crs:EPSG::3857', 'EPSG:4326', 'urn:ogc:def:crs:OGC:1.3:CRS84h'])('crs %s', (name) => {
    const crs = { type: 'name', properties: { name } };
    for (const value of [{ ...polygon(SQUARE), crs }, collection({ ...feature(polygon(SQUARE)), crs })]) {
      const error = errorOf(() => boundary(value));
      expect(error.code).toBe('BOUNDARY_INVALID');
      expect(error.message).toContain(name);
    }
  });

  it('rings that cross themselves, with the place', () => {
    const bowTie = [SQUARE[0], SQUARE[2], SQUARE[1], SQUARE[3], SQUARE[0]];
    const error = errorOf(() => boundary(collection(feature(polygon(SQUARE)), feature(polygon(SQUARE, bowTie)))));
    expect(error.code).toBe('BOUNDARY_CROSSES_ITSELF');
    expect(error.parameters).toMatchObject({ place: 'feature 2, hole 1', longitude: 10.5, latitude: 45.5 });
  });
});

describe('zones', () => {
  const named = (name: unknown, geometry: unknown = polygon(SQUARE)) => feature(geometry, { name });

  it('keeps the order of the file and takes numbers as names', () => {
    expect(zones(collection(named(' Upper '), named(12), named('lower'))).map(({ name }) => name)).toEqual([
      'Upper',
      '12',
      'lower',
    ]);
  });

  it('uses the property that it is told', () => {
    const text = JSON.stringify(collection(feature(polygon(SQUARE), { HYBAS_ID: 42, name: 'x' })));
    expect(parseZones(text, 'zones.geojson', 'HYBAS_ID')[0].name).toBe('42');
    expect(errorOf(() => parseZones(text, 'zones.geojson', 'toString')).code).toBe('ZONES_INVALID');
  });

  it.each([
    ['no feature', collection(), 'the whole file', /no feature/],
    ['a missing name', collection(named('a'), feature(polygon(SQUARE))), 'feature 2', /"name" is missing or empty/],
    ['an empty name', collection(named('  ')), 'feature 1', /missing or empty/],
    ['a name of another kind', collection(named({})), 'feature 1', /missing or empty/],
    ['the same name twice', collection(named('a'), named('b'), named('a ')), 'feature 3', /"a" is used by feature 1/],
    ['no area', collection(named('a', polygon([SQUARE[0], SQUARE[1], SQUARE[1], SQUARE[0]]))), 'feature 1', /no area/],
    ['a point', collection(named('a', { type: 'Point', coordinates: [1, 2] })), 'feature 1', /"Point" is not/],
  ])('refuses %s', (_, value, place, detail) => {
    const error = errorOf(() => zones(value));
    expect([error.code, error.parameters.place]).toEqual(['ZONES_INVALID', place]);
    expect(error.parameters.detail).toMatch(detail);
  });
});

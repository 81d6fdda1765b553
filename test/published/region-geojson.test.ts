import { describe, expect, it } from 'vitest';
import { parseBoundary } from '../../shared/region/boundary.ts';
import { resolveCrs } from '../../shared/region/resolve-crs.ts';

/** Geometries of RFC 7946 (The GeoJSON Format, August 2016), with the number of the section. */
const EXAMPLES = {
  'A.3 polygon without holes': {
    type: 'Polygon',
    coordinates: [
      [
        [100, 0],
        [101, 0],
        [101, 1],
        [100, 1],
        [100, 0],
      ],
    ],
  },
  'A.3 polygon with a hole': {
    type: 'Polygon',
    coordinates: [
      [
        [100, 0],
        [101, 0],
        [101, 1],
        [100, 1],
        [100, 0],
      ],
      [
        [100.8, 0.8],
        [100.8, 0.2],
        [100.2, 0.2],
        [100.2, 0.8],
        [100.8, 0.8],
      ],
    ],
  },
  'A.6 multipolygon': {
    type: 'MultiPolygon',
    coordinates: [
      [
        [
          [102, 2],
          [103, 2],
          [103, 3],
          [102, 3],
          [102, 2],
        ],
      ],
      [
        [
          [100, 0],
          [101, 0],
          [101, 1],
          [100, 1],
          [100, 0],
        ],
        [
          [100.2, 0.2],
          [100.2, 0.8],
          [100.8, 0.8],
          [100.8, 0.2],
          [100.2, 0.2],
        ],
      ],
    ],
  },
  '3.1.9 cut at the antimeridian': {
    type: 'MultiPolygon',
    coordinates: [
      [
        [
          [180, 40],
          [180, 50],
          [170, 50],
          [170, 40],
          [180, 40],
        ],
      ],
      [
        [
          [-170, 40],
          [-170, 50],
          [-180, 50],
          [-180, 40],
          [-170, 40],
        ],
      ],
    ],
  },
};

const read = (value: unknown) => parseBoundary(JSON.stringify(value), 'rfc7946.geojson').polygons;

describe('examples of RFC 7946', () => {
  it.each(Object.entries(EXAMPLES))('%s is read as it stands: its rings follow the right-hand rule', (_, geometry) => {
    const expected = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
    expect(read(geometry)).toEqual(expected);
    expect(read({ type: 'Feature', properties: null, geometry })).toEqual(expected);
  });

  it('5.2: the box of a region across the antimeridian leaves the other side of the earth out', async () => {
    const boundary = { polygons: read(EXAMPLES['3.1.9 cut at the antimeridian']) };
    const crs = await resolveCrs('equal-area', boundary);
    expect(Math.abs(crs.longitudeOfOriginDeg ?? 0)).toBe(180);
    expect(crs.latitudeOfOriginDeg).toBe(45);
  });

  it('1.5: the feature collection has kinds of geometry that bound nothing', () => {
    const collection = {
      type: 'FeatureCollection',
      features: [
        { type: 'Feature', geometry: { type: 'Point', coordinates: [102, 0.5] }, properties: { prop0: 'value0' } },
        { type: 'Feature', geometry: EXAMPLES['A.3 polygon without holes'], properties: { prop0: 'value0' } },
      ],
    };
    expect(() => read(collection)).toThrow(/feature 1: "Point" is not a Polygon/);
    expect(read({ ...collection, features: collection.features.slice(1) })).toHaveLength(1);
  });
});

import { describe, expect, it } from 'vitest';
import { stacItem, stacText } from '../../services/mosaicker/stac.ts';
import { DAY_QUALITY_BITS } from '../../shared/contract/quality.ts';
import { grid, input, item, RFC3339, read } from './stac-fixture.ts';

/**
 * Against the text of the SpatioTemporal Asset Catalog specification 1.1.0 (item-spec/item-spec.md,
 * collection-spec/collection-spec.md, commons/common-metadata.md) and of the extensions projection 2.0.0, raster
 * 2.0.0, file 2.1.0, processing 1.2.0 and classification 2.0.0. The name of the document stands at each check.
 */
describe('STAC 1.1.0 item (item-spec.md)', () => {
  it('has all required fields', () => {
    expect(item.type).toBe('Feature');
    expect(item.stac_version).toBe('1.1.0');
    expect(item.id).toBe('2025-06-12');
    for (const field of ['geometry', 'bbox', 'properties', 'links', 'assets']) expect(item).toHaveProperty(field);
  });

  it('names its collection in the field and in a link, as each requires the other', () => {
    expect(item.collection).toBe('orrin-evapotranspiration');
    const [link] = item.links.filter(({ rel }: { rel: string }) => rel === 'collection');
    expect(link).toEqual({ rel: 'collection', href: '../collection.json', type: 'application/json' });
  });

  it('gives every link href and rel, and one derived_from for each scene', () => {
    for (const link of item.links) expect([typeof link.href, typeof link.rel]).toEqual(['string', 'string']);
    const sources = item.links.filter(({ rel }: { rel: string }) => rel === 'derived_from');
    expect(sources.map(({ title }: { title: string }) => title)).toEqual(['LC08_A', 'LC09_B']);
    expect(sources.map(({ type }: { type: string }) => type)).toEqual(['application/json', 'text/plain']);
  });

  it('has a self link only when its address is known: it must be absolute', () => {
    expect(item.links.some(({ rel }: { rel: string }) => rel === 'self')).toBe(false);
    const published = read(stacItem({ ...input, selfHref: 'https://example.org/item.json' }));
    expect(published.links[0]).toEqual({
      rel: 'self',
      href: 'https://example.org/item.json',
      type: 'application/geo+json',
    });
  });

  it('has a datetime in UTC, or null with start and end (RFC 3339)', () => {
    expect(item.properties.datetime).toMatch(RFC3339);
    const period = read(stacItem({ ...input, time: { start: '2025-06-01T00:00:00Z', end: '2025-06-30T23:59:59Z' } }));
    expect(period.properties.datetime).toBeNull();
    expect(period.properties.start_datetime).toMatch(RFC3339);
    expect(period.properties.end_datetime).toMatch(RFC3339);
  });

  it('lists the extension of every prefixed field, and no other', () => {
    const prefixes = new Set(
      [...JSON.stringify(item).matchAll(/"(proj|raster|file|processing|classification):/g)].map(([, prefix]) => prefix),
    );
    const names: Record<string, string> = {
      proj: 'projection/v2.0.0',
      raster: 'raster/v2.0.0',
      file: 'file/v2.1.0',
      processing: 'processing/v1.2.0',
      classification: 'classification/v2.0.0',
    };
    const expected = [...prefixes].map((prefix) => `https://stac-extensions.github.io/${names[prefix]}/schema.json`);
    expect([...item.stac_extensions].sort()).toEqual(expected.sort());
    const plain = read(stacItem({ ...input, assets: input.assets.slice(1) }));
    expect(plain.stac_extensions.join()).not.toContain('classification');
  });

  it('is the same text each time, whatever the order of assets and scenes, and holds no clock', () => {
    const shuffled = { ...input, assets: [...input.assets].reverse(), scenes: [...input.scenes].reverse() };
    expect(stacText(stacItem(shuffled))).toBe(stacText(stacItem(input)));
    expect(JSON.stringify(item)).not.toMatch(/"(created|updated|processing:datetime)"/);
    expect(Object.keys(item.assets)).toEqual(['et-day', 'et-fraction', 'quality-day']);
  });
});

describe('geometry of the item (RFC 7946)', () => {
  it('is one closed ring, counter-clockwise, in longitude and latitude', () => {
    expect(item.geometry.type).toBe('Polygon');
    const [ring] = item.geometry.coordinates as [number[][]];
    expect(ring.length).toBeGreaterThanOrEqual(4);
    expect(ring[0]).toEqual(ring[ring.length - 1]);
    const doubledArea = ring.slice(1).reduce((sum, [x, y], i) => sum + ring[i][0] * y - x * ring[i][1], 0);
    expect(doubledArea).toBeGreaterThan(0);
    for (const [longitude, latitude] of ring) {
      expect(Math.abs(longitude)).toBeLessThanOrEqual(180);
      expect(Math.abs(latitude)).toBeLessThanOrEqual(90);
    }
  });

  it('has a box that just holds the ring', () => {
    const [ring] = item.geometry.coordinates as [number[][]];
    const longitudes = ring.map(([longitude]) => longitude);
    const latitudes = ring.map(([, latitude]) => latitude);
    expect(item.bbox).toEqual([
      Math.min(...longitudes),
      Math.min(...latitudes),
      Math.max(...longitudes),
      Math.max(...latitudes),
    ]);
  });

  it('is cut at the antimeridian, with west greater than east in the box (sections 3.1.9 and 5.2)', () => {
    const proj4 = '+proj=laea +lat_0=-17.8 +lon_0=179.9 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs';
    const crs = {
      code: 'laea:-17.8,179.9',
      proj4,
      kind: 'laea',
      latitudeOfOriginDeg: -17.8,
      longitudeOfOriginDeg: 179.9,
    } as const;
    const fiji = read(stacItem({ ...input, grid: { ...grid, crs } }));
    expect(fiji.geometry.type).toBe('MultiPolygon');
    expect(fiji.geometry.coordinates).toHaveLength(2);
    expect(fiji.bbox[0]).toBeGreaterThan(fiji.bbox[2]);
    for (const [ring] of fiji.geometry.coordinates) {
      expect(ring[0]).toEqual(ring[ring.length - 1]);
      const longitudes = ring.map(([longitude]: number[]) => longitude);
      expect(Math.max(...longitudes) - Math.min(...longitudes)).toBeLessThan(2);
      expect(longitudes.filter((longitude: number) => Math.abs(longitude) === 180).length).toBeGreaterThanOrEqual(2);
    }
  });
});

describe('projection extension 2.0.0 (README.md)', () => {
  it('gives shape as rows and columns, and the affine transform row by row', () => {
    expect(item.properties['proj:shape']).toEqual([1400, 2000]);
    const transform = item.properties['proj:transform'];
    expect(transform).toHaveLength(9);
    const apply = (column: number, row: number) => [
      transform[0] * column + transform[1] * row + transform[2],
      transform[3] * column + transform[4] * row + transform[5],
    ];
    expect(apply(0, 0)).toEqual([-30_000, 21_000]);
    expect(apply(2000, 1400)).toEqual([30_000, -21_000]);
    expect(item.properties['proj:bbox']).toEqual([-30_000, -21_000, 30_000, 21_000]);
  });

  it('sets the code to null for a system without one and writes the system out', () => {
    expect(item.properties['proj:code']).toBeNull();
    expect(item.properties['proj:projjson'].type).toBe('ProjectedCRS');
    expect(item.properties['proj:wkt2']).toMatch(/^PROJCRS\[/);
  });

  it('gives the code alone for a system of the register', () => {
    const utm = {
      code: 'EPSG:32632',
      proj4: '+proj=utm +zone=32 +datum=WGS84 +units=m +no_defs',
      kind: 'epsg',
      epsg: 32632,
    } as const;
    const found = read(stacItem({ ...input, grid: { ...grid, crs: utm, originX: 500_010, originY: 5_040_000 } }));
    expect(found.properties['proj:code']).toBe('EPSG:32632');
    expect(found.properties).not.toHaveProperty('proj:projjson');
  });
});

describe('assets', () => {
  const asset = item.assets['et-day'];

  it('carry the media type of a cloud-optimised GeoTIFF (OGC 21-026) and a role', () => {
    expect(asset.type).toBe('image/tiff; application=geotiff; profile=cloud-optimized');
    expect(asset.roles).toEqual(['data']);
    expect(item.assets['quality-day'].roles).toContain('metadata');
    expect(asset.href).toBe('./et-day.tif');
  });

  it('carry the data fields of the common metadata and of raster 2.0.0', () => {
    expect(asset).toMatchObject({
      data_type: 'int16',
      nodata: -32768,
      unit: 'mm',
      'raster:scale': 0.001,
      'raster:offset': 0,
      'raster:sampling': 'area',
      'raster:spatial_resolution': 30,
    });
    expect(asset.bands).toHaveLength(1);
    expect(asset.bands[0].statistics).toEqual({
      minimum: 0.1,
      maximum: 8.2,
      mean: 4.1,
      stddev: 1.3,
      count: 2_282_000,
      valid_percent: 81.5,
    });
  });

  it('say "" for a number without unit (common-metadata.md, Units)', () => {
    expect(item.assets['et-fraction'].unit).toBe('');
  });

  it('leave out nodata where every value says something, and statistics where nothing is valid', () => {
    expect(item.assets['quality-day']).not.toHaveProperty('nodata');
    expect(item.assets['et-fraction'].bands[0]).not.toHaveProperty('statistics');
  });

  it('give size and a multihash of SHA-256 in lower case (file 2.1.0)', () => {
    expect(asset['file:size']).toBe(1234);
    expect(item.assets['quality-day']['file:checksum']).toBe(`1220${'ab'.repeat(32)}`);
    expect(asset['file:checksum']).toMatch(/^[a-f0-9]{68}$/);
  });

  it('describe each bit of a quality layer (classification 2.0.0)', () => {
    const fields = item.assets['quality-day'].bands[0]['classification:bitfields'];
    expect(fields).toHaveLength(DAY_QUALITY_BITS.length);
    for (const field of fields) {
      expect(Number.isInteger(field.offset)).toBe(true);
      expect(field.length).toBe(1);
      expect(field.classes.map(({ value }: { value: number }) => value)).toEqual([0, 1]);
    }
    expect(fields[2]).toMatchObject({ name: 'cloud', offset: 2 });
  });
});

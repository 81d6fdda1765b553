import { describe, expect, it } from 'vitest';
import { nodataOf, scaling } from '../../../shared/raster/gdal-tags.ts';
import { type GeoKeys, proj4OfGeoKeys } from '../../../shared/raster/geo-keys.ts';

describe('the nodata text of a file', () => {
  it.each([
    ['0', 'uint16', 0],
    ['-9999\0', 'int16', -9999],
    [' 255 ', 'uint8', 255],
    ['nan', 'float32', Number.NaN],
    ['-inf', 'float32', Number.NEGATIVE_INFINITY],
    // Written with fifteen digits; the samples hold the nearest float32.
    ['-3.40282346638529e+38', 'float32', -3.4028234663852886e38],
    ['-9999.9', 'float32', Math.fround(-9999.9)],
    ['-9999.9', 'float64', -9999.9],
    // No sample can have these.
    ['-9999', 'uint8', null],
    ['0.5', 'int16', null],
    ['nan', 'uint16', null],
    ['', 'uint8', null],
    ['none', 'float32', null],
    [undefined, 'uint8', null],
  ] as const)('%j in %s is %s', (text, type, value) => {
    expect(nodataOf(text, type)).toBe(value);
  });
});

describe('scale and offset', () => {
  it('are those of the first band, in whatever order the attributes stand', () => {
    const xml =
      '<GDALMetadata>\n  <Item name="SCALE" sample="1" role="scale">7</Item>\n' +
      '  <Item role="scale" sample="0" name="SCALE">0.00341802</Item>\n' +
      '  <Item name="OFFSET" sample="0" role="offset">149</Item>\n  <Item name="scale">3</Item>\n</GDALMetadata>';
    expect(scaling(xml)).toEqual([0.00341802, 149]);
  });

  it('are 1 and 0 where the file has none that are numbers', () => {
    expect(scaling(undefined)).toEqual([1, 0]);
    expect(scaling('<Item name="SCALE" sample="0" role="scale">much</Item>')).toEqual([1, 0]);
  });
});

describe('the system of GeoKeys', () => {
  const albers: GeoKeys = {
    GTModelTypeGeoKey: 1,
    ProjectedCSTypeGeoKey: 32767,
    ProjCoordTransGeoKey: 11,
    ProjStdParallel1GeoKey: 29.5,
    ProjStdParallel2GeoKey: 45.5,
    ProjNatOriginLatGeoKey: 23,
    ProjNatOriginLongGeoKey: -96,
  };

  it('takes the datum from the geographic system or the datum code', async () => {
    const wgs84 = await proj4OfGeoKeys({ ...albers, GeographicTypeGeoKey: 4326 });
    expect(wgs84).toEqual({
      proj4: '+proj=aea +lat_0=23 +lon_0=-96 +x_0=0 +y_0=0 +lat_1=29.5 +lat_2=45.5 +datum=WGS84 +units=m +no_defs',
    });
    expect(await proj4OfGeoKeys({ ...albers, GeogGeodeticDatumGeoKey: 6326 })).toEqual(wgs84);
    expect(await proj4OfGeoKeys({ ...albers, GeographicTypeGeoKey: 4269 })).toMatchObject({
      proj4: expect.stringContaining('+ellps=GRS80'),
    });
  });

  it.each([
    ['no datum', albers, 'datum'],
    ['NAD27, whose shift needs a grid file', { ...albers, GeographicTypeGeoKey: 4267 }, 'EPSG:4267'],
    ['feet', { ...albers, GeographicTypeGeoKey: 4326, ProjLinearUnitsGeoKey: 9002 }, 'unit'],
    ['gradians', { ...albers, GeographicTypeGeoKey: 4326, GeogAngularUnitsGeoKey: 9105 }, 'unit'],
    ['a method that is not known', { ...albers, ProjCoordTransGeoKey: 24 }, 'method 24'],
    ['a code that does not exist', { GTModelTypeGeoKey: 1, ProjectedCSTypeGeoKey: 1 }, 'EPSG:1'],
    ['a geocentric model', { GTModelTypeGeoKey: 3 }, 'model type 3'],
    ['no keys', {}, 'no GeoKeys'],
  ] as const)('is refused for %s, with the reason', async (_, keys, said) => {
    expect(await proj4OfGeoKeys(keys)).toEqual({ reason: expect.stringContaining(said) });
  });
});

import { describe, expect, it } from 'vitest';
import type { BasinloomError } from '../../../shared/contract/errors.ts';
import { meridianConvergence, projection } from '../../../shared/region/crs.ts';
import type { Boundary } from '../../../shared/region/geometry.ts';
import { epsgDefinition, resolveCrs } from '../../../shared/region/resolve-crs.ts';
import { closed } from './shapes.ts';

const box = (west: number, south: number, east: number, north: number): Boundary['polygons'][number] => [
  closed([west, south], [east, south], [east, north], [west, north]),
];
const boundary = (...boxes: Boundary['polygons']): Boundary => ({ polygons: boxes });
const VIENNA = boundary(box(16.1, 48.0, 16.7, 48.4));

const failure = async (crs: string | number, where = VIENNA) =>
  (await resolveCrs(crs, where).then(
    () => null,
    (error: unknown) => error,
  )) as BasinloomError | null;

describe('equal-area system', () => {
  it('is centred on the bounding box, to a tenth of a degree', async () => {
    const crs = await resolveCrs('equal-area', boundary(box(16.12, 47.9, 16.7, 48.31), box(15.9, 48, 16, 48.2)));
    expect(crs).toEqual({
      code: 'laea:48.1,16.3',
      proj4: '+proj=laea +lat_0=48.1 +lon_0=16.3 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
      kind: 'laea',
      latitudeOfOriginDeg: 48.1,
      longitudeOfOriginDeg: 16.3,
    });
    expect(projection(crs).forward(16.3, 48.1).map(Math.abs)).toEqual([expect.closeTo(0, 6), expect.closeTo(0, 6)]);
  });

  it('has no negative zero', async () => {
    const crs = await resolveCrs('equal-area', boundary(box(-0.03, -0.05, 0.01, 0.01)));
    expect([crs.latitudeOfOriginDeg, crs.longitudeOfOriginDeg, crs.code]).toEqual([0, 0, 'laea:0,0']);
  });

  it('stays with a region on both sides of the antimeridian', async () => {
    const fiji = boundary(box(177, -18, 180, -16), box(-180, -18, -179, -17));
    const crs = await resolveCrs('equal-area', fiji);
    expect(crs.code).toBe('laea:-17,179');
    const { forward } = projection(crs);
    expect(forward(180, -17)[0]).toBeCloseTo(forward(-180, -17)[0], 3);
    expect(forward(-179, -17)[0]).toBeGreaterThan(forward(180, -17)[0]);
    expect((await resolveCrs('equal-area', boundary(box(170, 0, 180, 1), box(-180, 0, -160, 1)))).code).toBe(
      'laea:0.5,-175',
    );
  });

  it('is not turned by a region in two far parts', async () => {
    expect((await resolveCrs('equal-area', boundary(box(-60, 0, -50, 1), box(40, 0, 50, 1)))).code).toBe('laea:0.5,-5');
  });
});

describe('systems by code', () => {
  it('takes numbers and text, whatever the case', async () => {
    const utm = {
      code: 'EPSG:32633',
      proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs',
      kind: 'epsg',
      epsg: 32633,
    };
    for (const crs of [32633, '32633', 'EPSG:32633', 'epsg:32633']) expect(await resolveCrs(crs, VIENNA)).toEqual(utm);
    const south = boundary(box(30, -20, 31, -19));
    expect((await resolveCrs(32736, south)).proj4).toBe('+proj=utm +zone=36 +south +datum=WGS84 +units=m +no_defs');
    expect((await resolveCrs('EPSG:3035', VIENNA)).proj4).toMatch(/^\+proj=laea \+lat_0=52 .*\+units=m \+no_defs$/);
  });

  it.each([3035, 31256, 31287, 3416, 25833])('accepts EPSG:%i near Vienna', async (code) => {
    expect((await resolveCrs(code, VIENNA)).epsg).toBe(code);
  });

  it.each<[string | number, RegExp]>([
    ['EPSG:999999', /EPSG:999999: unknown/],
    ['equal area', /equal area: unknown/],
    [3035.5, /3035.5: unknown/],
    [32661000, /unknown/],
    [2065, /axes do not point east and north/],
    [27700, /datum is not known/],
    [26733, /not a projected system in metres/],
    [54012, /cannot be computed/],
  ])('does not know %s', async (crs, message) => {
    const error = await failure(crs);
    expect(error?.message).toMatch(message);
    expect(error?.code).toBe(crs === 26733 ? 'CRS_NOT_METRIC' : 'CRS_UNKNOWN');
  });

  it.each([
    ['geographic', 4326],
    ['geographic, another datum', 4269],
    ['geocentric, though in metres', 4978],
    ['vertical', 5773],
    ['compound', 7405],
    ['US survey feet', 2227],
    ['Web Mercator', 3857],
    ['Web Mercator by its old name', 900913],
  ])('refuses %s: EPSG:%i', async (_, code) => {
    const error = await failure(code, boundary(box(-121.5, 37, -121, 37.5)));
    expect([error?.code, error?.parameters.crs]).toEqual(['CRS_NOT_METRIC', `EPSG:${code}`]);
  });

  it('refuses Web Mercator at the equator too', async () => {
    expect((await failure(3857, boundary(box(10, -0.1, 10.2, 0.1))))?.code).toBe('CRS_NOT_METRIC');
  });

  it('refuses systems whose areas are wrong at the boundary', async () => {
    expect((await failure(3395))?.message).toMatch(/areas are wrong by 12\d %/);
    expect((await failure(3034))?.message).toMatch(/areas are wrong by -\d %/);
    // Nine degrees from the central meridian of its zone.
    expect((await failure(32632, boundary(box(17.5, 40, 18, 40.5))))?.code).toBe('CRS_NOT_METRIC');
  });

  it('refuses systems that cannot be computed at the boundary', async () => {
    // Far outside its zone a transverse Mercator does not find the way back.
    const error = await failure(32633, boundary(box(100, 10, 101, 11)));
    expect(error?.code).toBe('CRS_UNKNOWN');
    expect(error?.message).toMatch(/EPSG:32633 \(it cannot be computed at longitude 100\.00, latitude 10\.00\)/);
  });

  it('gives definitions of other systems to readers of rasters', async () => {
    expect(await epsgDefinition(4326)).toBe('+proj=longlat +datum=WGS84 +no_defs');
    expect(await epsgDefinition(5070)).toMatch(/^\+proj=aea .*\+no_defs$/);
    expect([await epsgDefinition(999999), await epsgDefinition(Number.NaN), await epsgDefinition(32600)]).toEqual([
      null,
      null,
      null,
    ]);
  });
});

describe('projection', () => {
  it('is made once for each definition', () => {
    const proj4 = '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs';
    expect(projection({ proj4 })).toBe(projection({ proj4 }));
  });

  it('has a convergence that is negative east of the central meridian and positive west of it, in the north', () => {
    const crs = {
      code: 'EPSG:32633',
      proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs',
      kind: 'epsg',
    } as const;
    const at = (longitude: number, latitude: number) =>
      meridianConvergence(crs, ...projection(crs).forward(longitude, latitude));
    expect(at(15, 48)).toBeCloseTo(0, 9);
    expect(at(17, 48)).toBeLessThan(0);
    expect(at(13, 48)).toBeGreaterThan(0);
    expect(at(17, -48)).toBeGreaterThan(0);
  });
});

import { execFileSync, spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import type { CrsSpec } from '../../shared/contract/grid.ts';
import { meridianConvergence, projection } from '../../shared/region/crs.ts';
import { epsgCrs } from '../../shared/region/resolve-crs.ts';

const DEGREE = Math.PI / 180;
const proj = (text: string): CrsSpec => ({ code: 'test', kind: 'epsg', proj4: `${text} +units=m +no_defs` });

describe('worked examples of the literature', () => {
  it('Lambert azimuthal equal-area: IOGP Guidance Note 7-2, EPSG:3035', async () => {
    const { forward, inverse } = projection(await epsgCrs(3035));
    const [x, y] = forward(5, 50);
    expect(Math.abs(x - 3962799.45)).toBeLessThan(0.006);
    expect(Math.abs(y - 2999718.85)).toBeLessThan(0.006);
    const [longitude, latitude] = inverse(3962799.45, 2999718.85);
    expect(Math.abs(longitude - 5)).toBeLessThan(1e-7);
    expect(Math.abs(latitude - 50)).toBeLessThan(1e-7);
  });

  it('transverse Mercator: IOGP Guidance Note 7-2, British National Grid without its datum', () => {
    const grid = proj('+proj=tmerc +lat_0=49 +lon_0=-2 +k=0.9996012717 +x_0=400000 +y_0=-100000 +ellps=airy');
    const [x, y] = projection(grid).forward(0.5, 50.5);
    // The note rounds on its way: its own intermediate values give 577274.984, 69740.492.
    expect(Math.abs(x - 577274.99)).toBeLessThan(0.01);
    expect(Math.abs(y - 69740.5)).toBeLessThan(0.01);
  });

  it('transverse Mercator: Snyder 1987 (USGS PP 1395), numerical examples', () => {
    const [x, y] = projection(proj('+proj=tmerc +lat_0=0 +lon_0=-75 +k=0.9996 +ellps=clrk66')).forward(-73.5, 40.5);
    expect(Math.abs(x - 127106.5)).toBeLessThan(0.06);
    expect(Math.abs(y - 4484124.4)).toBeLessThan(0.06);
  });

  it('Lambert azimuthal equal-area, oblique: Snyder 1987 (USGS PP 1395), pp. 333-336', () => {
    const [x, y] = projection(proj('+proj=laea +lat_0=40 +lon_0=-100 +x_0=0 +y_0=0 +ellps=clrk66')).forward(-110, 30);
    expect(Math.abs(x + 965932.1)).toBeLessThan(0.06);
    expect(Math.abs(y + 1056814.9)).toBeLessThan(0.06);
  });
});

describe('meridian convergence', () => {
  it('is the series of Redfearn 1948 (Empire Survey Review 9:318-322) on a transverse Mercator', async () => {
    const utm = await epsgCrs(32633);
    for (const [longitude, latitude] of [
      [17, 48],
      [13.2, 60],
      [15.5, -35],
      [12.1, 5],
    ]) {
      const difference = (longitude - 15) * DEGREE;
      const phi = latitude * DEGREE;
      const eta2 = 0.006739496742276 * Math.cos(phi) ** 2;
      const cubic = ((difference * Math.cos(phi)) ** 2 / 3) * (1 + 3 * eta2 + 2 * eta2 * eta2);
      const series = difference * Math.sin(phi) * (1 + cubic);
      // The literature counts from true north to grid north, the code from grid north to true north.
      const found = meridianConvergence(utm, ...projection(utm).forward(longitude, latitude));
      expect(Math.abs(found + series)).toBeLessThan(2e-8);
    }
  });

  it('is the difference of longitude on polar systems (Snyder 1987, chapters 21 and 24)', () => {
    const arctic = proj('+proj=laea +lat_0=90 +lon_0=-45 +x_0=0 +y_0=0 +datum=WGS84');
    const antarctic = proj('+proj=stere +lat_0=-90 +lat_ts=-71 +lon_0=0 +x_0=0 +y_0=0 +datum=WGS84');
    for (const east of [-130, -20, 0, 35, 100]) {
      const north = meridianConvergence(arctic, ...projection(arctic).forward(-45 + east, 75));
      expect(north / DEGREE).toBeCloseTo(-east, 6);
      const south = meridianConvergence(antarctic, ...projection(antarctic).forward(east, -75));
      expect(south / DEGREE).toBeCloseTo(east, 6);
    }
  });
});

const hasGdalTransform = spawnSync('gdaltransform', ['--version']).status === 0;
type Pair = readonly [number, number];

/** PROJ's answer, through GDAL. */
function gdal(from: string, to: string, points: readonly Pair[]): Pair[] {
  const output = execFileSync('gdaltransform', ['-s_srs', from, '-t_srs', to, '-output_xy'], {
    input: points.map((point) => point.join(' ')).join('\n'),
    encoding: 'utf8',
  });
  return output
    .trim()
    .split('\n')
    .map((line) => line.split(' ').map(Number) as unknown as Pair);
}

/** Points over the area of use, up to `reach` degrees from the centre. */
const around = (longitude: number, latitude: number, reach: number): Pair[] =>
  [-1, -0.6, -0.1, 0, 0.3, 0.8, 1].flatMap((dx) =>
    [-1, -0.45, 0, 0.2, 1].map((dy): Pair => [longitude + dx * reach, latitude + dy * reach]),
  );

describe.skipIf(!hasGdalTransform)('agreement with PROJ (gdaltransform) to 1 mm, there and back', () => {
  const laea = (latitude: number, longitude: number) =>
    `+proj=laea +lat_0=${latitude} +lon_0=${longitude} +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs`;
  it.each<[string, string | number, Pair[]]>([
    ['equal-area in Europe', laea(48.1, 16.3), around(16.3, 48.1, 4)],
    ['equal-area at the equator', laea(-3.2, -62.5), around(-62.5, -3.2, 15)],
    ['equal-area in the south', laea(-33.4, 147.9), around(147.9, -33.4, 6)],
    ['equal-area in the far north', laea(71.5, 128.3), around(128.3, 71.5, 5)],
    ['equal-area on the antimeridian', laea(-17, 179.8), around(178, -17, 1.5)],
    ['UTM north', 32633, around(15, 47, 3.5)],
    ['UTM south', 32722, around(-51, -25, 3.5)],
    ['LAEA Europe', 3035, around(15, 50, 14)],
    ['Albers of the contiguous United States', 5070, around(-98, 38, 10)],
  ])('%s', async (_, crs, points) => {
    const spec = typeof crs === 'number' ? await epsgCrs(crs) : { proj4: crs };
    const { forward, inverse } = projection(spec);
    const target = typeof crs === 'number' ? `EPSG:${crs}` : crs;
    const theirs = gdal('OGC:CRS84', target, points);
    const back = gdal(target, 'OGC:CRS84', theirs);
    points.forEach(([longitude, latitude], i) => {
      const [x, y] = forward(longitude, latitude);
      expect(Math.hypot(x - theirs[i][0], y - theirs[i][1])).toBeLessThan(1e-3);
      const [ourLongitude, ourLatitude] = inverse(...theirs[i]);
      const east = (ourLongitude - back[i][0]) * Math.cos(latitude * DEGREE);
      expect(Math.hypot(east, ourLatitude - back[i][1]) * 111_320).toBeLessThan(1e-3);
      // Both cut the series of the equal-area inverse at the same term, which leaves more than their difference.
      const returned = inverse(x, y);
      const away = Math.hypot((returned[0] - longitude) * Math.cos(latitude * DEGREE), returned[1] - latitude);
      expect(away * 111_320).toBeLessThan(3e-3);
    });
  });
});

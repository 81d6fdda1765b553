import { execFileSync, spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { laeaProjJson, laeaWkt2 } from '../../services/mosaicker/stac/crs.ts';
import { gridFootprint } from '../../services/mosaicker/stac/footprint.ts';
import { overpassTime, periodTime } from '../../services/mosaicker/stac/time.ts';

/** An independent reader: gdalsrsinfo and gdaltransform of GDAL (with PROJ), where the machine has them. */
const hasGdal = spawnSync('gdalsrsinfo', ['--version']).status === 0;
const proj4Of = (definition: string): string =>
  execFileSync('gdalsrsinfo', ['-o', 'proj4', definition], { encoding: 'utf8' }).trim();

describe.skipIf(!hasGdal)('the equal-area system as GDAL reads it', () => {
  const wanted = '+proj=laea +lat_0=-12.5 +lon_0=-70.125 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs';

  it('is the wanted one, from WKT2 (ISO 19162:2019)', () => {
    expect(proj4Of(laeaWkt2(-12.5, -70.125))).toBe(wanted);
  });

  it('is the wanted one, from PROJJSON (schema v0.5)', () => {
    expect(proj4Of(JSON.stringify(laeaProjJson(-12.5, -70.125)))).toBe(wanted);
  });

  it('puts the corners of the grid where the footprint has them', () => {
    const proj4 = '+proj=laea +lat_0=45.5 +lon_0=10.25 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs';
    const grid = {
      crs: { code: 'laea:45.5,10.25', proj4, kind: 'laea' },
      originX: -90_000,
      originY: 60_000,
      resolution: 30,
      rows: 4000,
      columns: 6000,
      tileSize: 512,
    } as const;
    const corners = '-90000 -60000\n90000 -60000\n90000 60000\n-90000 60000\n';
    const output = execFileSync('gdaltransform', ['-s_srs', proj4, '-t_srs', 'OGC:CRS84', '-output_xy'], {
      input: corners,
      encoding: 'utf8',
    });
    const expected = output
      .trim()
      .split('\n')
      .map((line) => line.split(' ').map(Number));
    const { geometry } = gridFootprint(grid);
    const [ring] = geometry.coordinates as number[][][];
    expected.forEach(([longitude, latitude], corner) => {
      const [x, y] = ring[(corner * (ring.length - 1)) / 4];
      expect(x).toBeCloseTo(longitude, 6);
      expect(y).toBeCloseTo(latitude, 6);
    });
  });
});

describe('times (RFC 3339)', () => {
  it('are one moment for one overpass and an interval for several', () => {
    expect(overpassTime(['2025-06-12T17:21:03Z'])).toEqual({ datetime: '2025-06-12T17:21:03Z' });
    expect(overpassTime(['2025-06-12T17:45:00Z', '2025-06-12T17:21:03Z'])).toEqual({
      start: '2025-06-12T17:21:03Z',
      end: '2025-06-12T17:45:00Z',
    });
  });

  it('run from the first to the last second of the solar days', () => {
    const june = { id: '2025-06', from: '2025-06-01', to: '2025-06-30' };
    expect(periodTime(june, 0)).toEqual({ start: '2025-06-01T00:00:00Z', end: '2025-06-30T23:59:59Z' });
    expect(periodTime(june, -7)).toEqual({ start: '2025-06-01T07:00:00Z', end: '2025-07-01T06:59:59Z' });
  });
});

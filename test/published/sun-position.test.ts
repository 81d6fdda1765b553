import { existsSync, readFileSync } from 'node:fs';
import * as Astronomy from 'astronomy-engine';
import { parse } from 'csv-parse/sync';
import { describe, expect, test } from 'vitest';
import { sunPosition, sunVector } from '../../shared/flux/sun/sun-position.ts';
import { parseInstant } from '../../shared/time/calendar.ts';

const RADIANS = Math.PI / 180;

// Reda & Andreas 2003, Solar Position Algorithm for Solar Radiation Applications, NREL/TP-560-34302, appendix A.5.
describe('worked example of the NREL solar position report', () => {
  const instant = parseInstant('2003-10-17T19:30:30Z');
  const latitude = 39.742476 * RADIANS;
  const longitude = -105.1786 * RADIANS;
  const sun = sunPosition(latitude, longitude, instant);
  // The low-precision formulas promise 0.01 degree.
  const printed = [
    ['elevation without refraction', sun.elevation, 39.872046],
    ['azimuth', sun.azimuth, 194.340241],
    ['declination', sun.declination, -9.31434],
    ['hour angle', sun.hourAngle, 11.1059],
  ] as const;
  test.each(printed)('%s', (_, radians, degrees) => {
    expect(Math.abs(radians / RADIANS - degrees)).toBeLessThan(0.01);
  });
  test('distance', () => {
    expect(Math.abs(sun.distanceAu - 0.9965422974)).toBeLessThan(1e-4);
  });
  test('incidence on the 30 degree slope facing 10 degrees east of south', () => {
    const vector = sunVector(latitude, longitude, instant);
    const [slope, azimuth] = [30 * RADIANS, 170 * RADIANS];
    const cosine =
      Math.cos(slope) * vector.up +
      Math.sin(slope) * (Math.sin(azimuth) * vector.east + Math.cos(azimuth) * vector.north);
    // The report adds refraction to the elevation (0.016 degree), which this geometry leaves out.
    expect(Math.abs(Math.acos(cosine) / RADIANS - 25.187)).toBeLessThan(0.03);
  });
});

// The example's table as kept with other open test suites, where it is at hand.
const table = new URL('../../../shared/data/standards/nrel_spa_example.csv', import.meta.url);
describe.skipIf(!existsSync(table))('table of the NREL example', () => {
  test('declination and distance', () => {
    const rows: { quantity: string; value: string }[] = parse(readFileSync(table), { columns: true });
    const value = (name: string) => Number(rows.find(({ quantity }) => quantity === name)?.value);
    const sun = sunPosition(value('lat') * RADIANS, value('lon') * RADIANS, parseInstant('2003-10-17T19:30:30Z'));
    expect(Math.abs(sun.declination / RADIANS - value('delta_decl'))).toBeLessThan(0.01);
    expect(Math.abs(sun.distanceAu - value('R'))).toBeLessThan(1e-4);
  });
});

// An independent ephemeris (npm astronomy-engine, a VSOP87 series), 1984..2049.
describe('independent ephemeris', () => {
  test('position within 0.02 degree, distance within 2e-4 au', () => {
    let worstDegrees = 0;
    let worstDistance = 0;
    for (let k = 0; k < 600; k++) {
      const instant = parseInstant('1984-01-01T00:00:00Z') + k * 40.123 * 86400;
      const [latitude, longitude] = [-80 + ((k * 37) % 161), -180 + ((k * 101) % 361)];
      const date = new Date(instant * 1000);
      const observer = new Astronomy.Observer(latitude, longitude, 0);
      const equator = Astronomy.Equator(Astronomy.Body.Sun, date, observer, true, true);
      const horizon = Astronomy.Horizon(date, observer, equator.ra, equator.dec);
      const [altitude, azimuth] = [horizon.altitude * RADIANS, horizon.azimuth * RADIANS];
      const sun = sunVector(latitude * RADIANS, longitude * RADIANS, instant);
      const chord = Math.hypot(
        sun.east - Math.cos(altitude) * Math.sin(azimuth),
        sun.north - Math.cos(altitude) * Math.cos(azimuth),
        sun.up - Math.sin(altitude),
      );
      worstDegrees = Math.max(worstDegrees, chord / RADIANS);
      worstDistance = Math.max(worstDistance, Math.abs(sunPosition(0, 0, instant).distanceAu - equator.dist));
    }
    // 0.01 of the formulas, 0.0024 of the sun's parallax, and UT1 against UTC.
    expect(worstDegrees).toBeLessThan(0.02);
    expect(worstDistance).toBeLessThan(2e-4);
  });
});

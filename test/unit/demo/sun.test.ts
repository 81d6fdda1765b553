import { Body, Equator, Horizon, Observer } from 'astronomy-engine';
import { describe, expect, it } from 'vitest';
import { instantOf } from '../../../infra/demo/calendar.ts';
import { slopeDayTable } from '../../../infra/demo/slope-day-table.ts';
import { slopeDayRatio, sunAngles, sunAt, sunTerms } from '../../../infra/demo/sun.ts';

describe('the sun of the demo', () => {
  // Outside check: the ephemeris of the astronomy-engine library.
  it.each([-60, -3, 13, 29, 45, 68])('stands where an ephemeris has it, to 0.05 degree, on day %i', (day) => {
    for (const hour of [6, 9.7, 12, 16]) {
      const hours = day * 24 + hour;
      const { elevation, azimuth } = sunAngles(sunAt(hours), 12.1, 41.05);
      const time = new Date(instantOf(hours));
      const observer = new Observer(41.05, 12.1, 0);
      const equator = Equator(Body.Sun, time, observer, true, true);
      const horizon = Horizon(time, observer, equator.ra, equator.dec);
      expect(Math.abs(elevation - horizon.altitude)).toBeLessThan(0.05);
      expect(Math.abs(azimuth - horizon.azimuth)).toBeLessThan(0.05);
      expect(Math.abs(sunAt(hours).distance - equator.dist)).toBeLessThan(2e-4);
    }
  });

  it('shines on a slope as on the turned plane: normal times the direction of the sun', () => {
    const { declination, greenwichHourAngle } = sunAt(29 * 24 + 9.8);
    const [hourAngle, latitude] = [greenwichHourAngle + 0.21, 0.716];
    const { level, south, west } = sunTerms(declination, hourAngle, latitude);
    const east = -Math.cos(declination) * Math.sin(hourAngle);
    const north =
      Math.cos(latitude) * Math.sin(declination) - Math.sin(latitude) * Math.cos(declination) * Math.cos(hourAngle);
    expect(level ** 2 + east ** 2 + north ** 2).toBeCloseTo(1, 12);
    expect(south).toBeCloseTo(-north, 12);
    expect(west).toBeCloseTo(-east, 12);
  });
});

describe('the day on a slope', () => {
  const [declination, latitude] = [0.39, 0.716];
  const [sinL, cosL] = [Math.sin(latitude), Math.cos(latitude)];

  it('is 1 on level ground', () => {
    expect(slopeDayRatio(declination, sinL, cosL, 0, 0)).toBeCloseTo(1, 12);
  });

  it.each([
    [0.3, 0],
    [-0.2, 0.25],
    [0.05, -0.4],
    [0.01, 0.02],
  ])('agrees with a plain sum over the day on a rise of %f, %f', (east, north) => {
    let [slope, level] = [0, 0];
    const steps = 100_000;
    for (let k = 0; k < steps; k++) {
      const terms = sunTerms(declination, -Math.PI + ((k + 0.5) * 2 * Math.PI) / steps, latitude);
      if (terms.level <= 0) continue;
      level += terms.level;
      slope += Math.max(0, terms.level + terms.south * north + terms.west * east);
    }
    expect(slopeDayRatio(declination, sinL, cosL, east, north)).toBeCloseTo(slope / level, 5);
  });

  it('is in the table to 2 in 10 000 where the land of the demo lies', () => {
    const table = slopeDayTable(declination);
    const middle = (41 * Math.PI) / 180;
    for (let east = -0.35; east < 0.35; east += 0.043) {
      for (let north = -0.35; north < 0.35; north += 0.037) {
        const exact = slopeDayRatio(declination, Math.sin(middle), Math.cos(middle), east, north);
        expect(Math.abs(table(east, north) - exact)).toBeLessThan(2e-4);
      }
    }
  });
});

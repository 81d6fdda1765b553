import { describe, expect, it } from 'vitest';
import { ALBEDO_WEIGHTS } from '../../shared/flux/albedo.ts';
import {
  airPressure,
  incomingShortwave,
  precipitableWater,
  slopeDayFactor,
  sunOnSlope,
  transmissivity,
} from '../../shared/flux/radiation.ts';
import { soilHeatMetric, soilHeatSebal } from '../../shared/flux/soil-heat.ts';
import { broadbandEmissivity, leafAreaIndex, ndvi, roughnessLength, savi } from '../../shared/flux/surface.ts';

describe('albedo weights', () => {
  it.each(['tm', 'oli'] as const)('%s: sum to 1.000, as published (Tasumi et al. 2008; Ke et al. 2016)', (model) => {
    const sum = Object.values(ALBEDO_WEIGHTS[model]).reduce((a, b) => a + b, 0);
    expect(sum).toBeCloseTo(1, 10);
  });

  it('regression: a spectrum gives 0.16041 by TM and 0.15728 by OLI weights', () => {
    const spectrum = { blue: 0.05, green: 0.07, red: 0.08, nir: 0.32, swir1: 0.2, swir2: 0.15 };
    const albedo = (model: 'tm' | 'oli') =>
      (Object.keys(spectrum) as (keyof typeof spectrum)[]).reduce(
        (sum, band) => sum + ALBEDO_WEIGHTS[model][band] * spectrum[band],
        0,
      );
    expect(albedo('tm')).toBeCloseTo(0.16041, 6);
    expect(albedo('oli')).toBeCloseTo(0.15728, 6);
  });
});

describe('vegetation', () => {
  it('NDVI and SAVI (Huete 1988) of red 0.08, nir 0.32', () => {
    expect(ndvi(0.08, 0.32)).toBeCloseTo(0.6, 12);
    expect(savi(0.08, 0.32, 0.5)).toBeCloseTo(0.4, 12);
    expect(savi(0.08, 0.32, 0.1)).toBeCloseTo(0.528, 12);
  });

  it('leaf area index (Bastiaanssen 1998; Allen et al. 2007 eq. 18): 0 .. 6', () => {
    expect(leafAreaIndex(0.4)).toBeCloseTo(0.780485, 6);
    expect(leafAreaIndex(0.528)).toBeCloseTo(1.420358, 6);
    expect(leafAreaIndex(0.7)).toBe(6);
    expect(leafAreaIndex(-0.2)).toBe(0);
    expect(leafAreaIndex(Number.NaN)).toBeNaN();
  });

  it('broadband emissivity (Tasumi 2003; Allen et al. 2007): 0.95 + 0.01 LAI, 0.98 above 3, water 0.985', () => {
    expect(broadbandEmissivity(1, 0.4)).toBeCloseTo(0.96, 12);
    expect(broadbandEmissivity(4, 0.8)).toBe(0.98);
    expect(broadbandEmissivity(0, -0.1)).toBe(0.985);
  });

  it('roughness 0.018 LAI, at least 0.005 m (Tasumi 2003)', () => {
    expect(roughnessLength(4)).toBeCloseTo(0.072, 12);
    expect(roughnessLength(0.1)).toBe(0.005);
  });
});

describe('radiation', () => {
  // FAO-56 annex 2, table 2.1 (printed to 0.1 kPa).
  it.each([
    [0, 101.3],
    [200, 99.0],
    [1000, 90.0],
    [1800, 81.8],
    [2000, 79.8],
    [3000, 70.5],
    [4000, 62.1],
  ])('pressure at %i m is %f kPa (FAO-56 table 2.1)', (elevation, kPa) => {
    expect(Math.abs(airPressure(elevation) - kPa)).toBeLessThanOrEqual(0.0501);
  });

  it('transmissivity is the sum of beam and diffuse of ASCE-EWRI 2005 appendix D: KB + 0.35 - 0.36 KB', () => {
    for (const [pressure, water, cosine] of [
      [87.9, 20.6, 0.866],
      [101.3, 30, 0.7],
      [75, 8, 0.95],
    ]) {
      const beam = 0.98 * Math.exp((-0.00146 * pressure) / cosine - 0.075 * (water / cosine) ** 0.4);
      // 0.64 * 0.98 = 0.6272, printed as 0.627.
      expect(transmissivity(pressure, water, cosine, 1)).toBeCloseTo(beam + 0.35 - 0.36 * beam, 3);
    }
  });

  it('regression: clear sky at 1200 m, ea 1.5 kPa, zenith 30 degrees', () => {
    const pressure = airPressure(1200);
    const water = precipitableWater(1.5, pressure);
    const tau = transmissivity(pressure, water, Math.cos(Math.PI / 6), 1);
    expect(water).toBeCloseTo(20.558293, 5);
    expect(tau).toBeCloseTo(0.76428, 5);
    expect(incomingShortwave(Math.cos(Math.PI / 6), tau, 0.968486)).toBeCloseTo(876.2847, 2);
  });

  it('sun on a slope equals the trigonometric form over cos s (Duffie & Beckman 1991 eq. 1.6.2)', () => {
    const [phi, delta] = [0.74, 0.32];
    for (const s of [0, 0.1, 0.35]) {
      for (const aspect of [-2, -0.5, 0, 1.1, 3]) {
        for (const w of [-0.8, 0, 0.6]) {
          // gamma from south, west positive; the upward normal leans toward the aspect.
          const trig =
            Math.sin(delta) * Math.sin(phi) * Math.cos(s) -
            Math.sin(delta) * Math.cos(phi) * Math.sin(s) * Math.cos(aspect) +
            Math.cos(delta) * Math.cos(phi) * Math.cos(s) * Math.cos(w) +
            Math.cos(delta) * Math.sin(phi) * Math.sin(s) * Math.cos(aspect) * Math.cos(w) +
            Math.cos(delta) * Math.sin(aspect) * Math.sin(s) * Math.sin(w);
          const east = -Math.cos(delta) * Math.sin(w);
          const north = Math.cos(phi) * Math.sin(delta) - Math.sin(phi) * Math.cos(delta) * Math.cos(w);
          const up = Math.sin(phi) * Math.sin(delta) + Math.cos(phi) * Math.cos(delta) * Math.cos(w);
          // A slope that faces south-west falls that way: its gradient points uphill, north-east.
          const slopeNorth = Math.tan(s) * Math.cos(aspect);
          const slopeEast = Math.tan(s) * Math.sin(aspect);
          expect(sunOnSlope(east, north, up, slopeEast, slopeNorth)).toBeCloseTo(Math.max(0, trig) / Math.cos(s), 12);
        }
      }
    }
  });

  it('a slope that faces the equator has the day of a level place farther south (geometric identity)', () => {
    // At the equinox a south slope s at latitude phi sees the sun of the level at phi - s.
    const [phi, s] = [(40 * Math.PI) / 180, (30 * Math.PI) / 180];
    const factor = slopeDayFactor(0, Math.tan(s), Math.sin(phi), Math.cos(phi), 0);
    // Per horizontal area: divided by cos s; daily level radiation at the equinox goes with cos(latitude).
    expect(factor).toBeCloseTo(Math.cos(phi - s) / Math.cos(phi) / Math.cos(s), 6);
  });

  // Regression: Ra on slopes by an independent integration of 200,000 steps (MJ m-2 d-1 of slope area at 40 N, 20
  // degrees). Dividing by cos s gives the horizontal area that the factor speaks of.
  it.each([
    { day: 172, level: 41.873, south: 39.515, east: 40.693, north: 39.877 },
    { day: 81, level: 29.027, south: 35.56, east: 28.735, north: 18.993 },
    { day: 355, level: 13.519, south: 24.842, east: 13.845, north: 2.116 },
  ])(
    'regression: day $day, slopes of 20 degrees at 40 N, within 0.3 % of level ground',
    ({ day, level, ...facing }) => {
      const { south, east, north } = facing;
      const declination = 0.409 * Math.sin((2 * Math.PI * day) / 365 - 1.39);
      const phi = (40 * Math.PI) / 180;
      const s = (20 * Math.PI) / 180;
      const perSlopeArea = (slopeEast: number, slopeNorth: number) =>
        level * Math.cos(s) * slopeDayFactor(slopeEast, slopeNorth, Math.sin(phi), Math.cos(phi), declination);
      // A slope that faces south rises toward north.
      expect(Math.abs(perSlopeArea(0, Math.tan(s)) - south) / level).toBeLessThan(0.003);
      expect(Math.abs(perSlopeArea(-Math.tan(s), 0) - east) / level).toBeLessThan(0.003);
      expect(Math.abs(perSlopeArea(Math.tan(s), 0) - east) / level).toBeLessThan(0.003);
      expect(Math.abs(perSlopeArea(0, -Math.tan(s)) - north) / level).toBeLessThan(0.003);
    },
  );

  it('is exactly 1 on level ground', () => {
    expect(slopeDayFactor(0, 0, 0.6, 0.8, 0.2)).toBe(1);
  });
});

describe('soil heat', () => {
  it('METRIC (Tasumi 2003; Allen et al. 2007 eqs 26-27)', () => {
    expect(soilHeatMetric(500, 0.5, 300, 0.4)).toBeCloseTo(500 * (0.05 + 0.18 * Math.exp(-0.2605)), 9);
    expect(soilHeatMetric(500, 0.2, 310, 0.2)).toBeCloseTo(1.8 * 36.85 + 42, 9);
    expect(soilHeatMetric(500, 0, 295, -0.2)).toBe(250);
  });

  // The form of 1998 gives 0.157351 here: this is the later one.
  it('SEBAL (Bastiaanssen 2000): regression 0.165140 of Rn at 308 K, albedo 0.22, NDVI 0.6', () => {
    expect(soilHeatSebal(1, 0.22, 308, 0.6)).toBeCloseTo(0.16514, 6);
    expect(soilHeatSebal(500, 0.22, 308, -0.1)).toBe(250);
  });
});

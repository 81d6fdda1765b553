import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { balanceTemperature, fluxesAt, type Ground, setSoil } from '../../../infra/demo/energy-balance.ts';
import { exactResistance, tabulateResistance } from '../../../infra/demo/resistance.ts';
import { psiHeat, psiMomentum } from '../../../infra/demo/stability.ts';

const range = (min: number, max: number) => fc.double({ min, max, noNaN: true });

/** Grounds from wet full cover to dry bare soil and water under a summer sun. */
const grounds = fc
  .record({
    absorbed: range(400, 900),
    skyLongwave: range(280, 420),
    emissivity: range(0.95, 0.985),
    pressureKPa: range(85, 101),
    wind200: range(2, 12),
    logRoughness: range(Math.log(0.005), Math.log(0.15)),
    // Share of what is left after some loss to the sky and the heat into the ground; mm/h below.
    evaporation: range(0, 1.05),
    toSeaLevel: range(0, 5),
    leafArea: range(0, 6),
    openWater: fc.boolean(),
  })
  .map(({ leafArea, openWater, evaporation, ...rest }) => {
    const ground: Ground = { ...rest, evaporation: 0, soilShare: 0, soilPerDegree: 0 };
    setSoil(ground, leafArea, openWater);
    ground.evaporation = (evaporation * (1 - ground.soilShare) * (rest.absorbed - 150)) / 680;
    return ground;
  });
const layers = fc.record({ ratio: range(0.25, 0.35), reference: range(296, 306) });

describe('the forward energy balance', () => {
  it('closes to 1e-6 W m-2 with the full resistance, whatever the first guess', () => {
    fc.assert(
      fc.property(grounds, layers, range(280, 340), (ground, layer, guess) => {
        const surface = balanceTemperature(ground, layer, exactResistance, guess);
        const { netRadiation, soilHeat, sensibleHeat, latentHeat } = fluxesAt(surface, ground, layer, exactResistance);
        expect(Math.abs(netRadiation - soilHeat - sensibleHeat - latentHeat)).toBeLessThan(1e-6);
      }),
      { numRuns: 300 },
    );
  });

  it('gives a warmer surface where less water evaporates', () => {
    fc.assert(
      fc.property(grounds, layers, (ground, layer) => {
        const wet = balanceTemperature(ground, layer, exactResistance, 305);
        const dry = balanceTemperature(
          { ...ground, evaporation: ground.evaporation / 2 - 0.05 },
          layer,
          exactResistance,
          305,
        );
        expect(dry).toBeGreaterThan(wet);
      }),
      { numRuns: 100 },
    );
  });

  it('finds the same temperature from the table as from the full computation, to 0.02 K', () => {
    const table = tabulateResistance();
    fc.assert(
      fc.property(grounds, layers, (ground, layer) => {
        const exact = balanceTemperature(ground, layer, exactResistance, 305);
        expect(Math.abs(balanceTemperature(ground, layer, table, 305, 1e-3) - exact)).toBeLessThan(0.02);
      }),
      { numRuns: 300 },
    );
  });
});

describe('the summed stability corrections', () => {
  // Closed forms: Paulson 1970, J. Appl. Meteorol. 9:857; Webb 1970 for stable air.
  it.each([-60, -4, -0.5, -0.1, -0.01, -1e-4])('agree with the closed forms at z/L = %f', (zeta) => {
    const x = (1 - 16 * zeta) ** 0.25;
    const momentum = 2 * Math.log((1 + x) / 2) + Math.log((1 + x * x) / 2) - 2 * Math.atan(x) + Math.PI / 2;
    expect(psiMomentum(zeta)).toBeCloseTo(momentum, 8);
    expect(psiHeat(zeta)).toBeCloseTo(2 * Math.log((1 + x * x) / 2), 8);
  });

  it('are -5 z/L in stable air', () => {
    expect(psiMomentum(0.2)).toBe(-1);
    expect(psiHeat(0.2)).toBe(-1);
  });
});

describe('the resistance', () => {
  it('is that of the logarithmic profiles in neutral air', () => {
    const neutral = (Math.log(200 / 0.05) * Math.log(20)) / 0.41 ** 2;
    expect(exactResistance(0, Math.log(0.05))).toBeCloseTo(neutral, 10);
  });

  it('satisfies the definition of the Obukhov length', () => {
    // A g dT / (T u^2) that belongs to 1/L = -0.05 over z0 = 0.02, worked backward from the profiles.
    const [s, z0] = [-0.05, 0.02];
    const a = Math.log(200 / z0) - psiMomentum(200 * s);
    const b = Math.log(20) - psiHeat(2 * s) + psiHeat(0.1 * s);
    expect(exactResistance((-s * b) / (a * a), Math.log(z0))).toBeCloseTo((a * b) / 0.41 ** 2, 8);
  });

  it('is in the table to 1 in 1000 for the air over land by day', () => {
    const table = tabulateResistance();
    for (let drive = -0.004; drive < 0.05; drive += 0.00037) {
      for (let z0 = 0.005; z0 < 0.2; z0 *= 1.37) {
        const exact = exactResistance(drive, Math.log(z0));
        expect(Math.abs(table(drive, Math.log(z0)) / exact - 1)).toBeLessThan(1e-3);
      }
    }
  });
});

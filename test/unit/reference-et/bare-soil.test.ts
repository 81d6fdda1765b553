import fc from 'fast-check';
import { expect, test } from 'vitest';
import {
  bareSoilFraction,
  evaporationReduction,
  totalEvaporableWater,
} from '../../../shared/flux/reference-et/bare-soil.ts';

const LAYER = { totalEvaporableWaterMm: 22, readilyEvaporableWaterMm: 9 };
const dry = (days: number) => Array(days).fill({ referenceTallMm: 7, precipitationMm: 0 });

test('the layer of a loam', () => {
  expect(totalEvaporableWater(0.28, 0.12, 0.1)).toBeCloseTo(22, 10);
  expect(evaporationReduction(15, LAYER)).toBeCloseTo(0.538462, 6);
});

test('without rain bare soil gives nothing', () => {
  expect(bareSoilFraction(dry(30), LAYER)).toBe(0);
  expect(bareSoilFraction([], LAYER)).toBe(0);
});

test('a soaking rain gives the full rate, which then falls day by day', () => {
  const soaked = [...dry(5), { referenceTallMm: 7, precipitationMm: 60 }];
  const after = Array.from({ length: 8 }, (_, k) => bareSoilFraction([...soaked, ...dry(k)], LAYER));
  expect(after[0]).toBe(1);
  // 7 mm gone: still readily evaporable. 14 mm gone: (22 - 14) / 13.
  expect(after[1]).toBe(1);
  expect(after[2]).toBeCloseTo(8 / 13, 10);
  for (let k = 3; k < after.length; k++) expect(after[k]).toBeLessThan(after[k - 1]);
});

test('more rain never means less evaporation on the same day', () => {
  const rain = fc.double({ min: 0, max: 40, noNaN: true });
  const days = fc.array(
    fc.record({ referenceTallMm: fc.double({ min: -0.2, max: 12, noNaN: true }), precipitationMm: rain }),
    {
      minLength: 1,
      maxLength: 40,
    },
  );
  fc.assert(
    fc.property(days, rain, (record, extra) => {
      const fraction = bareSoilFraction(record, LAYER);
      expect(fraction).toBeGreaterThanOrEqual(0);
      expect(fraction).toBeLessThanOrEqual(1);
      const last = record[record.length - 1];
      const wetter = [...record.slice(0, -1), { ...last, precipitationMm: last.precipitationMm + extra }];
      expect(bareSoilFraction(wetter, LAYER)).toBeGreaterThanOrEqual(fraction);
    }),
  );
});

test('a layer without a falling stage is on or off', () => {
  const layer = { totalEvaporableWaterMm: 9, readilyEvaporableWaterMm: 9 };
  expect(bareSoilFraction(dry(3), layer)).toBe(0);
  expect(bareSoilFraction([{ referenceTallMm: 5, precipitationMm: 4 }], layer)).toBe(1);
});

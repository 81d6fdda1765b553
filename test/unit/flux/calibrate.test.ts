import { describe, expect, it } from 'vitest';
import type { MethodName } from '../../../shared/contract/calibration.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { type AnchorInput, calibrateLine } from '../../../shared/flux/calibrate.ts';
import { computePixel } from '../../../shared/flux/methods/compute-pixel.ts';
import type { AnchorFractions, PassParameters } from '../../../shared/flux/methods/method.ts';
import { METHODS } from '../../../shared/flux/methods/registry.ts';

const options: PassParameters & AnchorFractions = {
  datumElevation: 300,
  lapse: 0.0065,
  turbidity: 1,
  longwaveTemperature: 'air',
  inverseSquaredDistance: 0.97,
  declination: 0.38,
  terrain: true,
  coldFraction: 1.05,
  hotFraction: 0.04,
};
const cold: AnchorInput = {
  red: 0.05,
  nir: 0.45,
  albedo: 0.2,
  lst: 300,
  elevation: 320,
  slopeEast: 0,
  slopeNorth: 0,
  sunEast: 0.35,
  sunNorth: -0.2,
  sunUp: Math.sqrt(1 - 0.35 ** 2 - 0.2 ** 2),
  sinLatitude: 0.56,
  cosLatitude: Math.sqrt(1 - 0.56 ** 2),
  extraterrestrialDay: 480,
  airTemperatureDatum: 303,
  vapourPressure: 1.4,
  wind200: 6,
  stationElevation: 300,
  referenceInst: 0.85,
  referenceDay: 8.5,
  transmissivityDay: 0.74,
};
const hot: AnchorInput = { ...cold, red: 0.2, nir: 0.27, albedo: 0.22, lst: 323 };

const copies = (anchor: AnchorInput, n: number) => Array.from({ length: n }, () => anchor);
const calibrate = (method: MethodName, n = 1, given = options) =>
  calibrateLine(method, copies(cold, n), copies(hot, n), given);
/** n anchors over 1 K, evenly. */
const spread = (anchor: AnchorInput, n: number) =>
  Array.from({ length: n }, (_, k) => ({ ...anchor, lst: anchor.lst + k / (n - 1) - 0.5 }));

describe('the line through equal anchors', () => {
  it.each([1, 7])('METRIC, %i of each: both evaporate their fraction of the reference', (n) => {
    const line = calibrate('metric', n);
    expect(computePixel(METHODS.metric, cold, line, options).dayFraction).toBeCloseTo(1.05, 9);
    expect(computePixel(METHODS.metric, hot, line, options).dayFraction).toBeCloseTo(0.04, 9);
  });

  it.each([1, 7])('SEBAL, %i of each: the cold sheds no heat, the hot evaporates nothing', (n) => {
    const line = calibrate('sebal', n);
    expect(computePixel(METHODS.sebal, cold, line, options).sensibleHeat).toBeCloseTo(0, 9);
    expect(computePixel(METHODS.sebal, hot, line, options).latentHeat).toBeCloseTo(0, 9);
  });

  it('SEBAL starts at the cold end: dT is 0 at its datum temperature', () => {
    const { zeroTemperature } = calibrate('sebal');
    expect(zeroTemperature).toBeCloseTo(cold.lst + 0.0065 * (cold.elevation - 300), 9);
  });

  it('SEBAL knows no anchor fractions', () => {
    const other = calibrate('sebal', 1, { ...options, coldFraction: 0.7, hotFraction: 0.3 });
    expect(other.slope).toBe(calibrate('sebal').slope);
  });

  it('on slopes the cold anchor still evaporates its latent heat', () => {
    const tilted = { ...cold, slopeEast: 0.08, slopeNorth: -0.05 };
    const line = calibrateLine('metric', [tilted], [hot], options);
    const { latentHeat } = computePixel(METHODS.metric, tilted, line, options);
    expect(latentHeat).toBeCloseTo(line.anchors[0].latentHeat, 6);
  });

  it('reports what each anchor is, cold ones first', () => {
    const { anchors, slope, zeroTemperature } = calibrateLine('metric', copies(cold, 2), copies(hot, 3), options);
    expect(anchors).toHaveLength(5);
    expect(anchors[1]).toEqual(anchors[0]);
    expect(anchors[4]).toEqual(anchors[2]);
    for (const [anchor, inputs] of [
      [anchors[0], cold],
      [anchors[2], hot],
    ] as const) {
      const pixel = computePixel(METHODS.metric, inputs, { slope, zeroTemperature }, options);
      for (const name of ['netRadiation', 'soilHeat', 'sensibleHeat', 'latentHeat'] as const)
        expect(anchor[name], name).toBeCloseTo(pixel[name], 6);
    }
  });
});

describe('the standard errors of a line', () => {
  it('are 0 when all anchors of a role are equal', () => {
    expect(calibrate('metric', 5)).toMatchObject({ slopeSd: 0, zeroTemperatureSd: 0 });
  });

  it('shrink with the root of the number of anchors', () => {
    const solve = (n: number) => calibrateLine('metric', spread(cold, n), spread(hot, n), options);
    const [few, many] = [solve(10), solve(40)];
    expect(few.slopeSd / many.slopeSd).toBeGreaterThan(1.9);
    expect(few.slopeSd / many.slopeSd).toBeLessThan(2.3);
    expect(few.zeroTemperatureSd / many.zeroTemperatureSd).toBeGreaterThan(1.9);
    expect(few.zeroTemperatureSd / many.zeroTemperatureSd).toBeLessThan(2.3);
  });
});

describe('a line is refused', () => {
  const low = { ...options, coldFraction: 0.3, hotFraction: 0.29 };
  it.each([
    ['without cold anchors', [], [hot], /empty/],
    ['without hot anchors', [cold], [], /empty/],
    ['when hot is hardly hotter', [cold], [{ ...hot, lst: cold.lst + 1 }], /only 1\.00 K warmer/],
    ['when hot is colder', [cold], [{ ...hot, lst: cold.lst - 5 }], /only -5\.00 K warmer/],
    [
      'when the hot end sheds less heat than the cold one',
      [{ ...cold, albedo: 0.05 }],
      [{ ...hot, lst: 303, albedo: 0.6 }],
      /does not grow/,
    ],
    ['when an anchor has no reflectance', [cold, { ...cold, red: Number.NaN }], [hot], /finite energy balance/],
    ['when an anchor has no temperature', [cold], [{ ...hot, lst: Number.NaN }], /finite energy balance/],
    ['when no difference carries the heat', [cold], [{ ...hot, albedo: -50 }], /no temperature difference/],
  ])('%s', (_, colds, hots, message) => {
    const calibration = () => calibrateLine('metric', colds, hots, low);
    expect(calibration).toThrow(BasinloomError);
    expect(calibration).toThrow(message);
    expect(calibration).toThrow(expect.objectContaining({ code: 'PASS_CALIBRATION' }));
  });
});

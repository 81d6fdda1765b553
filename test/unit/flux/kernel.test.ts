import { readFile } from 'node:fs/promises';
import { beforeAll, describe, expect, it } from 'vitest';
import {
  createFluxKernel,
  type FluxKernel,
  type KernelParameters,
  kernelUrl,
} from '../../../shared/flux/kernel/flux-kernel.ts';
import { computePixel } from '../../../shared/flux/methods/compute-pixel.ts';
import { METHODS } from '../../../shared/flux/methods/registry.ts';
import { INPUT_PLANES, OUTPUT_PLANES, type OutputPlane, type PixelInputs } from '../../../shared/flux/planes.ts';

const PIXELS = 20_000;
let kernel: FluxKernel;
let elementary: Record<'testLn' | 'testExp' | 'testAtan', (x: number) => number> & {
  testPow(x: number, y: number): number;
};

beforeAll(async () => {
  const bytes = await readFile(kernelUrl);
  kernel = await createFluxKernel(bytes, PIXELS);
  const instance = await WebAssembly.instantiate(await WebAssembly.compile(bytes), {});
  elementary = instance.exports as unknown as typeof elementary;
});

/** mulberry32: a small seeded generator. */
function generator(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** A pixel of the physical range: water to full crop, calm to stormy, plain to steep slope, cool to very hot. */
function randomPixel(random: () => number): PixelInputs {
  const between = (low: number, high: number) => low + (high - low) * random();
  const f = Math.fround;
  const red = between(0.02, 0.35);
  const latitude = between(-0.9, 0.9);
  const zenith = between(0.15, 1.1);
  const azimuth = between(0, 2 * Math.PI);
  return {
    red: f(red),
    nir: f(between(0.02, 0.6)),
    albedo: f(between(0.05, 0.4)),
    lst: f(between(286, 332)),
    elevation: f(between(-50, 2500)),
    slopeEast: f(between(-0.4, 0.4)),
    slopeNorth: f(between(-0.4, 0.4)),
    sunEast: f(Math.sin(zenith) * Math.sin(azimuth)),
    sunNorth: f(Math.sin(zenith) * Math.cos(azimuth)),
    sunUp: f(Math.cos(zenith)),
    sinLatitude: f(Math.sin(latitude)),
    cosLatitude: f(Math.cos(latitude)),
    extraterrestrialDay: f(between(200, 490)),
    airTemperatureDatum: f(between(285, 312)),
    vapourPressure: f(between(0.3, 3)),
    wind200: f(between(1.5, 14)),
    stationElevation: f(between(0, 1500)),
    referenceInst: f(between(0.4, 1.1)),
    referenceDay: f(between(3, 12)),
    transmissivityDay: f(between(0.5, 0.8)),
  };
}

function load(pixels: readonly PixelInputs[]): void {
  for (const name of INPUT_PLANES) {
    pixels.forEach((pixel, i) => {
      kernel.inputs[name][i] = pixel[name];
    });
  }
}

const base: KernelParameters = {
  slope: Math.fround(0.21),
  zeroTemperature: Math.fround(298.5),
  datumElevation: 400,
  lapse: Math.fround(0.0065),
  turbidity: 1,
  longwaveTemperature: 'air',
  inverseSquaredDistance: 0.97,
  declination: 0.38,
  terrain: true,
};

/** Denominator of the relative error: small values are judged against what matters in the trade. */
const SCALE: Record<OutputPlane, number> = {
  netRadiation: 10,
  soilHeat: 10,
  sensibleHeat: 10,
  latentHeat: 10,
  evaporativeFraction: 0.05,
  dayFraction: 0.05,
};

function worstErrors(method: 'metric' | 'sebal', pixels: readonly PixelInputs[], parameters: KernelParameters) {
  load(pixels);
  kernel.run(method, pixels.length, parameters);
  const worst: Partial<Record<OutputPlane, number>> = {};
  pixels.forEach((pixel, i) => {
    const want = computePixel(METHODS[method], pixel, parameters, parameters);
    // An available energy near zero makes any fraction of it meaningless.
    const available = Math.abs(want.netRadiation - want.soilHeat);
    for (const name of OUTPUT_PLANES) {
      const fraction = name === 'evaporativeFraction' || name === 'dayFraction';
      if (fraction && (available < 50 || !Number.isFinite(want[name]) || Math.abs(want[name]) > 20)) continue;
      const error = Math.abs(kernel.outputs[name][i] - want[name]) / Math.max(SCALE[name], Math.abs(want[name]));
      worst[name] = Math.max(worst[name] ?? 0, error);
      if (Number.isNaN(error)) worst[name] = Number.NaN;
    }
  });
  return worst;
}

describe('elementary functions of the kernel', () => {
  const relative = (got: number, want: number) => Math.abs(got - want) / Math.abs(want);
  it('ln is within 3e-7 of the absolute or relative truth over 1e-6 .. 1e6', () => {
    for (let e = -6; e <= 6; e += 0.001) {
      const x = Math.fround(10 ** e);
      expect(Math.abs(elementary.testLn(x) - Math.log(x))).toBeLessThan(3e-7 * Math.max(1, Math.abs(Math.log(x))));
    }
  });
  it('exp is within 3e-7 relative over -30 .. 30', () => {
    for (let x = -30; x <= 30; x += 0.0037)
      expect(relative(elementary.testExp(Math.fround(x)), Math.exp(Math.fround(x)))).toBeLessThan(3e-7);
  });
  it('atan is within 2e-7 over 0 .. 100', () => {
    for (let x = 0; x <= 100; x += 0.013)
      expect(Math.abs(elementary.testAtan(Math.fround(x)) - Math.atan(Math.fround(x)))).toBeLessThan(2e-7);
  });
  it('pow is within 1e-6 relative for the powers in use', () => {
    for (const [low, high, y] of [
      [0.4, 1.1, 5.26],
      [1, 200, 0.4],
      [0.1, 2, 0.09],
    ]) {
      for (let k = 0; k <= 1000; k++) {
        const x = Math.fround(low + ((high - low) * k) / 1000);
        expect(relative(elementary.testPow(x, y), x ** Math.fround(y))).toBeLessThan(1.5e-6);
      }
    }
  });
  it('the logarithm of what has none is NaN', () => {
    expect(elementary.testLn(-1)).toBeNaN();
    expect(elementary.testLn(Number.NaN)).toBeNaN();
  });
});

describe('flux kernel against the scalar reference', () => {
  const cases = (['metric', 'sebal'] as const).flatMap((method) =>
    [true, false].flatMap((terrain) =>
      (['air', 'surface'] as const).map((longwave) => ({ method, terrain, longwave })),
    ),
  );
  it.each(cases)('$method, terrain $terrain, longwave from $longwave: within 1e-4', ({ method, terrain, longwave }) => {
    const random = generator(7);
    const pixels = Array.from({ length: PIXELS }, () => randomPixel(random));
    const worst = worstErrors(method, pixels, { ...base, terrain, longwaveTemperature: longwave });
    for (const name of OUTPUT_PLANES) expect(worst[name], name).toBeLessThan(1e-4);
  });
});

describe('flux kernel in extreme air', () => {
  it.each([
    ['nearly calm over hot soil', 0.5, 302, 335],
    ['calm over hot soil', 1, 302, 345],
    ['very stable', 0.5, 285, 298],
    ['around neutral', 3, 298, 299],
    ['stormy', 25, 286, 332],
  ])('%s: within 1e-4', (_, wind200, low, high) => {
    const random = generator(11);
    const pixels = Array.from({ length: 2000 }, (_, i) => ({
      ...randomPixel(random),
      elevation: base.datumElevation,
      stationElevation: base.datumElevation,
      wind200,
      lst: Math.fround(low + ((high - low) * i) / 2000),
    }));
    for (const slope of [0.05, 0.21, 0.5].map(Math.fround)) {
      const worst = worstErrors('metric', pixels, { ...base, slope });
      expect(worst.sensibleHeat).toBeLessThan(1e-5);
      expect(worst.latentHeat).toBeLessThan(1e-4);
    }
  });
});

describe('a pixel of the kernel', () => {
  it('has the same bits wherever it lies', () => {
    const random = generator(3);
    const pixels = Array.from({ length: 1000 }, () => randomPixel(random));
    load(pixels);
    kernel.run('metric', 1000, base);
    const before = OUTPUT_PLANES.map((name) => kernel.outputs[name].slice(0, 1000));
    const shifted = [...pixels.slice(137), ...pixels.slice(0, 137)];
    load(shifted);
    kernel.run('metric', 1000, base);
    OUTPUT_PLANES.forEach((name, p) => {
      const rotated = [...before[p].subarray(137), ...before[p].subarray(0, 137)];
      expect(Array.from(kernel.outputs[name].subarray(0, 1000))).toEqual(rotated);
    });
  });

  it.each(['red', 'nir', 'albedo', 'lst', 'elevation'] as const)(
    'is NaN where %s is, and leaves its neighbours alone',
    (plane) => {
      const random = generator(5);
      const pixels = Array.from({ length: 16 }, () => randomPixel(random));
      load(pixels);
      kernel.run('metric', 16, base);
      const neighbour = kernel.outputs.latentHeat[6];
      kernel.inputs[plane][5] = Number.NaN;
      kernel.run('metric', 16, base);
      expect(kernel.outputs.latentHeat[5]).toBeNaN();
      expect(kernel.outputs.dayFraction[5]).toBeNaN();
      expect(kernel.outputs.latentHeat[6]).toBe(neighbour);
    },
  );

  it('closes its energy balance', () => {
    const random = generator(9);
    const pixels = Array.from({ length: 500 }, () => randomPixel(random));
    load(pixels);
    kernel.run('metric', 500, base);
    const { netRadiation, soilHeat, sensibleHeat, latentHeat } = kernel.outputs;
    for (let i = 0; i < 500; i++) {
      expect(Math.abs(netRadiation[i] - soilHeat[i] - sensibleHeat[i] - latentHeat[i])).toBeLessThan(1e-3);
    }
  });

  it('on level land is the same with and without terrain', () => {
    const random = generator(4);
    const flat = { slopeEast: 0, slopeNorth: 0 };
    const pixels = Array.from({ length: 400 }, () => {
      const pixel = randomPixel(random);
      return { ...pixel, ...flat, stationElevation: pixel.elevation };
    });
    load(pixels);
    kernel.run('sebal', 400, { ...base, terrain: false });
    const level = kernel.outputs.dayFraction.slice(0, 400);
    kernel.run('sebal', 400, { ...base, terrain: true });
    expect(kernel.outputs.dayFraction.slice(0, 400)).toEqual(level);
  });
});

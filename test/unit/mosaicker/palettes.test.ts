import { describe, expect, it } from 'vitest';
import {
  fromHex,
  fromLinear,
  labDistance,
  labToRgb,
  type Rgb,
  rgbToLab,
  toLinear,
} from '../../../services/mosaicker/colour.ts';
import {
  colourIndex,
  FLAG_COLOURS,
  PALETTE_NAMES,
  PALETTE_SIZE,
  PALETTES,
  paletteHex,
} from '../../../services/mosaicker/palettes.ts';

type Matrix = readonly (readonly [number, number, number])[];

/**
 * Machado, Oliveira and Fernandes 2009, "A physiologically-based model for simulation of color vision deficiency",
 * IEEE Transactions on Visualization and Computer Graphics 15: 1291-1298, severity 1.0; on linear RGB.
 */
const DEUTERANOPIA: Matrix = [
  [0.367322, 0.860646, -0.227968],
  [0.280085, 0.672501, 0.047413],
  [-0.01182, 0.04294, 0.968881],
];
const PROTANOPIA: Matrix = [
  [0.152286, 1.052583, -0.204868],
  [0.114503, 0.786281, 0.099216],
  [-0.003882, -0.048116, 1.051998],
];
const VISIONS: readonly (readonly [string, Matrix | null])[] = [
  ['full colour vision', null],
  ['deuteranopia', DEUTERANOPIA],
  ['protanopia', PROTANOPIA],
];

function seen(rgb: Rgb, matrix: Matrix | null): Rgb {
  if (!matrix) return rgb;
  const linear = rgb.map(toLinear);
  const channel = (row: readonly number[]): number =>
    fromLinear(Math.min(1, Math.max(0, row[0] * linear[0] + row[1] * linear[1] + row[2] * linear[2])));
  return [channel(matrix[0]), channel(matrix[1]), channel(matrix[2])];
}

const colours = (name: (typeof PALETTE_NAMES)[number], count: number): Rgb[] =>
  Array.from({ length: count }, (_, i) => fromHex(paletteHex(PALETTES[name], i / (count - 1))));

describe.each(PALETTE_NAMES)('palette %s', (name) => {
  it('changes lightness one way only, from end to end', () => {
    const lightness = colours(name, PALETTE_SIZE).map((rgb) => rgbToLab(rgb)[0]);
    const steps = lightness.slice(1).map((value, i) => value - lightness[i]);
    expect(steps.every((step) => step > 0) || steps.every((step) => step < 0)).toBe(true);
    expect(Math.abs(lightness[PALETTE_SIZE - 1] - lightness[0])).toBeGreaterThan(0.5);
  });

  it('has even steps: each within a quarter of their mean', () => {
    const labs = colours(name, 17).map(rgbToLab);
    const steps = labs.slice(1).map((lab, i) => labDistance(lab, labs[i]));
    const mean = steps.reduce((a, b) => a + b, 0) / steps.length;
    for (const step of steps) {
      expect(step).toBeLessThan(1.25 * mean);
      expect(step).toBeGreaterThan(0.75 * mean);
    }
  });

  it.each(VISIONS)('keeps twelve neighbouring steps distinct in %s', (_, matrix) => {
    // 0.02 in OKLab is about where two patches side by side can just be told apart.
    const labs = colours(name, 12).map((rgb) => rgbToLab(seen(rgb, matrix)));
    const steps = labs.slice(1).map((lab, i) => labDistance(lab, labs[i]));
    expect(Math.min(...steps)).toBeGreaterThan(0.035);
  });
});

describe('class colours', () => {
  it.each(VISIONS)('are distinct in %s', (_, matrix) => {
    const labs = Object.values(FLAG_COLOURS).map((hex) => rgbToLab(seen(fromHex(hex), matrix)));
    const distances = labs.flatMap((a, i) => labs.slice(i + 1).map((b) => labDistance(a, b)));
    expect(Math.min(...distances)).toBeGreaterThan(0.06);
  });
});

describe('colour of a value', () => {
  it('takes the ends beyond the range and the middle of an empty range', () => {
    expect(colourIndex(-5, [0, 10])).toBe(0);
    expect(colourIndex(50, [0, 10])).toBe(PALETTE_SIZE - 1);
    expect(colourIndex(10, [0, 10])).toBe(PALETTE_SIZE - 1);
    expect(colourIndex(3, [3, 3])).toBe(PALETTE_SIZE / 2);
  });

  it('comes back from OKLab unchanged', () => {
    // Ottosson 2020 prints for white L = 1, a = b = 0.
    const white = rgbToLab([1, 1, 1]);
    expect(white[0]).toBeCloseTo(1, 6);
    expect(white[1]).toBeCloseTo(0, 6);
    const back = labToRgb(rgbToLab([0.2, 0.55, 0.9]));
    expect(back[0]).toBeCloseTo(0.2, 5);
    expect(back[1]).toBeCloseTo(0.55, 5);
    expect(back[2]).toBeCloseTo(0.9, 5);
  });
});

import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { fromHex, toBytes } from '../../../services/mosaicker/colour.ts';
import { outlinePath } from '../../../services/mosaicker/outlines.ts';
import { PALETTES, paletteHex } from '../../../services/mosaicker/palettes.ts';
import { classPng, mapPng, mapStyle, NODATA_GROUND, NODATA_STRIPE } from '../../../services/mosaicker/pictures.ts';
import { niceRange, niceStep, niceTicks } from '../../../services/mosaicker/scale.ts';
import { PRODUCT_NAMES } from '../../../shared/contract/products.ts';

async function pixels(png: Uint8Array): Promise<number[][]> {
  const { data, info } = await sharp(png).raw().toBuffer({ resolveWithObject: true });
  expect(info.channels).toBe(4);
  return Array.from({ length: info.width * info.height }, (_, i) => [...data.subarray(4 * i, 4 * i + 4)]);
}

const opaque = (hex: string): number[] => [...toBytes(fromHex(hex)), 255];

describe('map pictures', () => {
  it('give the end colours at the ends of the range', async () => {
    const png = await mapPng({
      width: 3,
      height: 1,
      values: new Float32Array([0, 10, 99]),
      range: [0, 10],
      palette: 'evaporation',
    });
    const [low, high, beyond] = await pixels(png);
    expect(low).toEqual(opaque(paletteHex(PALETTES.evaporation, 0)));
    expect(high).toEqual(opaque(paletteHex(PALETTES.evaporation, 1)));
    expect(beyond).toEqual(high);
  });

  it('hatch NaN inside the region and leave the outside transparent', async () => {
    const width = 40;
    const values = new Float32Array(width * width).fill(Number.NaN);
    const inside = new Uint8Array(width * width).fill(1);
    inside[0] = 0;
    const found = await pixels(await mapPng({ width, height: width, values, range: [0, 1], palette: 'ratio', inside }));
    expect(found[0][3]).toBe(0);
    const kinds = new Set(found.slice(1).map((pixel) => pixel.join()));
    expect(kinds).toEqual(new Set([opaque(NODATA_GROUND).join(), opaque(NODATA_STRIPE).join()]));
  });

  it('give the same bytes for the same values', async () => {
    const picture = {
      width: 16,
      height: 16,
      values: Float32Array.from({ length: 256 }, (_, i) => i / 40),
      range: [0, 6],
      palette: 'heat',
    } as const;
    expect(await mapPng(picture)).toEqual(await mapPng(picture));
  });

  it('paint classes, the outside and the unknown', async () => {
    const png = await classPng({
      width: 4,
      height: 1,
      classes: new Uint8Array([0, 1, 254, 255]),
      colours: ['#102030', '#a0b0c0'],
    });
    const [first, second, outside, unknown] = await pixels(png);
    expect(first).toEqual([16, 32, 48, 255]);
    expect(second).toEqual([160, 176, 192, 255]);
    expect(outside[3]).toBe(0);
    expect(unknown[3]).toBe(255);
  });
});

describe('map styles', () => {
  it('give every product a rising range and words for its ends', () => {
    for (const product of PRODUCT_NAMES) {
      const style = mapStyle(product, [3, 187]);
      expect(style.range[1]).toBeGreaterThan(style.range[0]);
      expect(style.lowWords).not.toBe('');
      expect(style.highWords).not.toBe('');
    }
  });

  it('keep fractions on one scale, whatever the map', () => {
    expect(mapStyle('et-ratio', [0.3, 0.4]).range).toEqual(mapStyle('et-ratio', [0, 1.2]).range);
  });

  it('start totals at zero', () => {
    expect(mapStyle('et-period', [42, 187]).range).toEqual([0, 200]);
  });
});

describe('scales', () => {
  it('round outward to whole steps', () => {
    expect(niceRange(3, 97)).toEqual([0, 100]);
    expect(niceRange(-0.031, 0.047)).toEqual([-0.04, 0.06]);
    expect(niceRange(5, 5)).toEqual([5, 6]);
    expect(niceStep(10, 5)).toBe(2);
    expect(niceTicks(0, 1, 5)).toEqual([0, 0.2, 0.4, 0.6, 0.8, 1]);
  });
});

describe('outlines', () => {
  const frame = { row: 100, column: 200, pixelsPerRow: 4, pixelsPerColumn: 4 };

  it('move rings from the grid into the picture', () => {
    const ring = [
      [200, 100],
      [240, 100],
      [240, 130],
      [200, 100],
    ] as const;
    expect(outlinePath([[ring]], frame)).toBe('M0 0L10 0L10 7.5L0 0Z');
  });

  it('leave out detail that no one can see, and rings that vanish', () => {
    const ring = [
      [200, 100],
      [200.1, 100],
      [240, 100],
      [240, 130],
      [200, 100],
    ] as const;
    expect(outlinePath([[ring]], frame)).toBe('M0 0L10 0L10 7.5L0 0Z');
    expect(
      outlinePath(
        [
          [
            [
              [200, 100],
              [200.2, 100.2],
              [200, 100],
            ],
          ],
        ],
        frame,
      ),
    ).toBe('');
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { markEligible, neighbourhoodMean } from '../../../shared/anchors/eligible.ts';
import { DAY_QUALITY } from '../../../shared/contract/quality.ts';
import { crop, cropAll, fieldPass, grow, LIMITS } from './planes.ts';
import { seeded } from './random.ts';

const INNER = { row: 10, column: 20, rows: 30, columns: 34 };
const WHOLE = grow(INNER, 2);

/** Fields with clouds, water, slopes, relief and a land-cover mask. */
function variedPlanes() {
  const random = seeded(5);
  const planes = {
    ...fieldPass(WHOLE, { seed: 3, fieldSize: 9 }),
    agricultural: new Uint8Array(WHOLE.rows * WHOLE.columns),
  };
  for (let at = 0; at < planes.ndvi.length; at += 1) {
    const dice = random();
    if (dice < 0.01) planes.quality[at] = DAY_QUALITY.cloud;
    else if (dice < 0.02) planes.quality[at] = DAY_QUALITY.water;
    else if (dice < 0.03) planes.lst[at] = Number.NaN;
    else if (dice < 0.1) planes.slopeEast[at] = 0.06;
    else if (dice < 0.2) planes.elevation[at] = 700;
    planes.agricultural[at] = dice > 0.9 ? 0 : 1;
  }
  return planes;
}

describe('a window', () => {
  const planes = variedPlanes();
  const whole = markEligible(planes, WHOLE, INNER, LIMITS);

  it('is the crop of the whole', () => {
    const count = whole.reduce((sum, value) => sum + value, 0);
    expect(count).toBeGreaterThan(100);
    expect(count).toBeLessThan(whole.length / 2);
    const window = fc
      .tuple(fc.nat(INNER.rows - 1), fc.nat(INNER.columns - 1), fc.nat(), fc.nat(), fc.integer({ min: 2, max: 4 }))
      .map(([r, c, rows, columns, halo]) => ({
        inner: {
          row: INNER.row + r,
          column: INNER.column + c,
          rows: 1 + (rows % (INNER.rows - r)),
          columns: 1 + (columns % (INNER.columns - c)),
        },
        halo,
      }));
    fc.assert(
      fc.property(window, ({ inner, halo }) => {
        // a wider halo than needed is cut to what the image has
        const wide = grow(inner, halo);
        const fits =
          wide.row >= WHOLE.row &&
          wide.column >= WHOLE.column &&
          wide.row + wide.rows <= WHOLE.row + WHOLE.rows &&
          wide.column + wide.columns <= WHOLE.column + WHOLE.columns;
        const outer = fits ? wide : grow(inner, 2);
        const cropped = markEligible(cropAll(planes, WHOLE, outer), outer, inner, LIMITS);
        expect(cropped).toEqual(crop(whole, INNER, inner));
      }),
      { numRuns: 60 },
    );
  });

  it('needs a halo of two pixels on every side', () => {
    const inner = { ...INNER, column: INNER.column - 1 };
    expect(() => markEligible(planes, WHOLE, inner, LIMITS)).toThrow(expect.objectContaining({ code: 'INTERNAL' }));
  });
});

describe('a pixel', () => {
  const outer = { row: 0, column: 0, rows: 5, columns: 5 };
  const inner = { row: 2, column: 2, rows: 1, columns: 1 };
  const centre = 12;
  const calm = () => ({
    ndvi: new Float32Array(25).fill(0.7),
    lst: new Float32Array(25).fill(300),
    quality: new Uint16Array(25),
    slopeEast: new Float32Array(25),
    slopeNorth: new Float32Array(25),
    elevation: new Float32Array(25).fill(100),
    agricultural: new Uint8Array(25).fill(1),
  });
  type Calm = ReturnType<typeof calm>;
  const judge = (change: (planes: Calm) => void, limits: Partial<typeof LIMITS & { clearRadius: 1 | 2 }> = {}) => {
    const planes = calm();
    change(planes);
    return markEligible(planes, outer, inner, { ...LIMITS, ...limits })[0];
  };

  it('in calm surroundings is eligible', () => {
    expect(judge(() => {})).toBe(1);
  });

  it.each<[string, (planes: Calm) => void]>([
    ['a cloud two pixels away', ({ quality }) => quality.fill(DAY_QUALITY.cloud, 0, 1)],
    ['no scene beside it', ({ quality }) => quality.fill(DAY_QUALITY.noScene, 11, 12)],
    ['water beside it', ({ quality }) => quality.fill(DAY_QUALITY.water, 6, 7)],
    ['NDVI 0', ({ ndvi }) => ndvi.fill(0)],
    ['NaN beside it', ({ ndvi }) => ndvi.fill(Number.NaN, 18, 19)],
    ['NaN temperature', ({ lst }) => lst.fill(Number.NaN, centre, centre + 1)],
    ['an uneven NDVI', ({ ndvi }) => ndvi.fill(0.5, 6, 9)],
    ['an uneven temperature', ({ lst }) => lst.fill(302.5, 6, 7)],
    [
      'a slope of 3.1 degrees to the north-east',
      ({ slopeEast, slopeNorth }) => {
        const component = Math.tan((3.1 * Math.PI) / 180) / Math.SQRT2;
        slopeEast.fill(component);
        slopeNorth.fill(component);
      },
    ],
    ['an unknown slope', ({ slopeNorth }) => slopeNorth.fill(Number.NaN)],
    ['501 m above the datum', ({ elevation }) => elevation.fill(601)],
    ['501 m below the datum', ({ elevation }) => elevation.fill(-401)],
    ['another land cover', ({ agricultural }) => agricultural.fill(0, centre, centre + 1)],
  ])('with %s is not', (_, change) => {
    expect(judge(change)).toBe(0);
  });

  it('passes at the limits', () => {
    expect(judge(({ slopeEast }) => slopeEast.fill(Math.tan((2.99 * Math.PI) / 180)))).toBe(1);
    expect(judge(({ elevation }) => elevation.fill(600))).toBe(1);
    expect(judge(({ quality }) => quality.fill(DAY_QUALITY.water, 0, 1))).toBe(1);
    expect(judge(({ slopeEast }) => slopeEast.fill(50), { maxSlopeDeg: 90 })).toBe(1);
    expect(judge(({ quality }) => quality.fill(DAY_QUALITY.cloud, 0, 1), { clearRadius: 1 })).toBe(1);
  });

  it('is measured by the sample standard deviation of its nine pixels', () => {
    // one of nine pixels 2 K warmer: sd = sqrt(4 (1 - 1/9) / 8) = 2/3
    const warmer = ({ lst }: Calm) => lst.fill(302, 6, 7);
    expect(judge(warmer, { maxTemperatureSdK: 0.6666 })).toBe(0);
    expect(judge(warmer, { maxTemperatureSdK: 0.6667 })).toBe(1);
  });
});

it('neighbourhood means are those of nine pixels, NaN where one is missing', () => {
  const outer = { row: 0, column: 0, rows: 4, columns: 5 };
  const inner = { row: 1, column: 1, rows: 2, columns: 3 };
  const plane = Float32Array.from({ length: 20 }, (_, at) => at);
  expect([...neighbourhoodMean(plane, outer, inner)]).toEqual([6, 7, 8, 11, 12, 13]);
  plane[0] = Number.NaN;
  expect([...neighbourhoodMean(plane, outer, inner)]).toEqual([Number.NaN, 7, 8, 11, 12, 13]);
});

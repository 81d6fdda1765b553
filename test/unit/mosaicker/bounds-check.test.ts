import { describe, expect, it } from 'vitest';
import { checkBounds, checkFluxOrder } from '../../../services/mosaicker/bounds-check.ts';
import { PRODUCT_NAMES, PRODUCTS, type ProductEntry, type ProductName } from '../../../shared/contract/products.ts';

const statistics = (minimum: number, mean: number, maximum: number, outOfBounds = 0) => ({
  count: 1000,
  minimum,
  mean,
  maximum,
  outOfBounds,
});

describe('bounds check', () => {
  it('takes range and unit from the product table, and skips products without a range', () => {
    for (const product of PRODUCT_NAMES) {
      const entry: ProductEntry = PRODUCTS[product];
      const rows = checkBounds(product, statistics(0, 0.5, 1), 'x');
      expect(rows).toHaveLength(entry.bounds ? 1 : 0);
      for (const row of rows) expect([row.low, row.high, row.unit]).toEqual([...(entry.bounds ?? []), entry.unit]);
    }
  });

  it('gives the share outside', () => {
    const [row] = checkBounds('et-day', statistics(-1, 4, 15, 25), '2025-06-12');
    expect(row.outside).toBe(25);
    expect(row.outsideShare).toBe(0.025);
  });

  it('gives a row of NaN, not of zeros, for a product without valid pixels', () => {
    const [row] = checkBounds('et-day', null, '2025-06-12');
    expect(row.count).toBe(0);
    expect(row.minimum).toBeNaN();
    expect(row.outsideShare).toBe(0);
  });

  it('reads a histogram', () => {
    // Bins of 1 mm from -2: centres -1.5, -0.5, 0.5, ...
    const counts = [0, 3, 10, 20, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 2];
    const [row] = checkBounds('et-day', { start: -2, width: 1, counts }, '2025-06-12');
    expect(row.count).toBe(35);
    expect(row.outside).toBe(5);
    expect(row.minimum).toBe(-1);
    expect(row.maximum).toBe(15);
    expect(row.mean).toBeCloseTo((3 * -0.5 + 10 * 0.5 + 20 * 1.5 + 2 * 14.5) / 35, 12);
    expect(checkBounds('et-day', { start: 0, width: 1, counts: [0, 0] }, 'x')[0].count).toBe(0);
  });
});

describe('order of the fluxes', () => {
  const usual: Partial<Record<ProductName, ReturnType<typeof statistics>>> = {
    'net-radiation': statistics(350, 560, 780),
    'soil-heat': statistics(30, 80, 140),
    'sensible-heat': statistics(-90, 140, 420),
    'latent-heat': statistics(20, 340, 640),
  };

  it('knows the usual one', () => {
    expect(checkFluxOrder('2025-06-12', usual)).toMatchObject({
      usual: true,
      largest: 'net-radiation',
      narrowest: 'soil-heat',
    });
  });

  it('names another one', () => {
    const found = checkFluxOrder('2025-06-12', { ...usual, 'soil-heat': statistics(-300, 80, 900) });
    expect(found).toMatchObject({ usual: false, narrowest: 'net-radiation' });
  });

  it('says nothing unless all four are there', () => {
    expect(checkFluxOrder('2025-06-12', { ...usual, 'soil-heat': null })).toBeNull();
    expect(checkFluxOrder('2025-06-12', {})).toBeNull();
  });
});

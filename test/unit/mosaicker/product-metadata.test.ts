import { describe, expect, it } from 'vitest';
import { cellMethods, cogMetadata } from '../../../services/mosaicker/product-metadata.ts';
import { PRODUCT_NAMES, PRODUCTS, type ProductEntry } from '../../../shared/contract/products.ts';
import { DAY_QUALITY, DAY_QUALITY_BITS } from '../../../shared/contract/quality.ts';

const provenance = { softwareVersion: '0.1.0', method: 'metric' };
const period = { id: '2025-06', from: '2025-06-01', to: '2025-06-30' };

describe('metadata inside a product file', () => {
  it('repeats scale, offset and unit of the product table', () => {
    for (const product of PRODUCT_NAMES) {
      const entry: ProductEntry = PRODUCTS[product];
      const found = cogMetadata(product, { date: '2025-06-12' }, null, provenance);
      expect([found.scale, found.offset, found.unit]).toEqual([entry.scale, entry.offset, entry.unit]);
      expect(found.items.units).toBe(entry.unit);
      expect(found.items.AREA_OR_POINT).toBe('Area');
    }
  });

  it('gives a standard name only where the product table has one', () => {
    for (const product of PRODUCT_NAMES) {
      const entry: ProductEntry = PRODUCTS[product];
      const { items } = cogMetadata(product, { period }, null, provenance);
      expect(items.standard_name).toBe(entry.standardName);
      expect('standard_name' in items).toBe(entry.standardName !== undefined);
    }
  });

  it('says which values are sums over time', () => {
    expect(cellMethods('et-day')).toContain('time: sum');
    expect(cellMethods('et-period')).toContain('time: sum');
    expect(cellMethods('et-ratio')).toBe('area: mean time: mean');
    expect(cellMethods('latent-heat')).toBe('area: mean time: point');
    expect(cellMethods('quality-day')).toBeUndefined();
  });

  it('writes the bits of a quality layer as masks with meanings, in one order', () => {
    const { items } = cogMetadata('quality-day', { date: '2025-06-12' }, null, provenance);
    const masks = items.flag_masks.split(' ').map(Number);
    const meanings = items.flag_meanings.split(' ');
    expect(masks).toHaveLength(DAY_QUALITY_BITS.length);
    expect(meanings).toHaveLength(DAY_QUALITY_BITS.length);
    expect(masks[meanings.indexOf('cloud_shadow')]).toBe(DAY_QUALITY.cloudShadow);
    // CF 3.5: meanings are words of letters, digits and _ - . + @
    for (const meaning of meanings) expect(meaning).toMatch(/^[A-Za-z0-9_.+@-]+$/);
  });

  it('names the date or the period, and holds no time of making', () => {
    expect(cogMetadata('et-day', { date: '2025-06-12' }, null, provenance).items.date).toBe('2025-06-12');
    const { items } = cogMetadata('et-period', { period }, null, provenance);
    expect([items.period, items.period_first_day, items.period_last_day]).toEqual([
      '2025-06',
      '2025-06-01',
      '2025-06-30',
    ]);
    expect(JSON.stringify(items)).not.toMatch(/T\d\d:\d\d/);
    expect(cogMetadata('et-period', { period }, null, provenance)).toEqual(
      cogMetadata('et-period', { period }, null, provenance),
    );
  });

  it('passes statistics through, and leaves them out when no pixel is valid', () => {
    const statistics = { minimum: 0.1, maximum: 8, mean: 4, standardDeviation: 1, validPercent: 90 };
    expect(cogMetadata('et-day', { date: '2025-06-12' }, statistics, provenance).statistics).toEqual(statistics);
    expect('statistics' in cogMetadata('et-day', { date: '2025-06-12' }, null, provenance)).toBe(false);
  });
});

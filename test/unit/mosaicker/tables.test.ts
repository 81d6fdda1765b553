import { parse } from 'csv-parse/sync';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fixedNumber } from '../../../services/mosaicker/tables/csv.ts';
import {
  adjustmentsCsv,
  anchorRows,
  anchorsCsv,
  boundsCsv,
  overlapsCsv,
  type SeamRow,
  seamsCsv,
  type ZoneRow,
  zonesCsv,
} from '../../../services/mosaicker/tables.ts';
import { fixtureModel } from './report-fixture.ts';

const zone: ZoneRow = {
  zone: 'Upper "Orrin", north\nbank',
  zone_kind: 'sub-basin',
  land_cover: 'all',
  period: '2025-06',
  from: '2025-06-01',
  to: '2025-06-30',
  area_km2: 81.5,
  covered_area_km2: 81,
  valid_fraction: 81 / 81.5,
  et_mean_mm: 5.2,
  et_volume_m3: 421_200,
  observations_mean: 2.5,
  longest_gap_days_max: 16,
  pixel_count: 90_011,
};

const seam: SeamRow = {
  when: '2025-06-12',
  variable: 'et-day',
  kind: 'pass-edge',
  seam: 'A|B',
  stage: 'before',
  count: 10,
  mean_jump: 0.2,
  mean_neighbour_jump: 0,
  ratio: Number.POSITIVE_INFINITY,
  ratio_ci_low: Number.NaN,
  ratio_ci_high: Number.NaN,
  mean_difference: -0.00000001,
  difference_ci_low: -0.1,
  difference_ci_high: 0.1,
};

const read = (text: string): Record<string, string>[] => parse(text, { columns: true });

describe('tables', () => {
  it('are RFC 4180: header, CRLF after every line, doubled quotes', () => {
    const text = zonesCsv([zone]);
    expect(text.endsWith('\r\n')).toBe(true);
    expect(text.startsWith('zone,zone_kind,land_cover,period,from,to,area_km2,covered_area_km2,')).toBe(true);
    expect(text).toContain('"Upper ""Orrin"", north\nbank",sub-basin');
    expect(read(text)[0].zone).toBe(zone.zone);
  });

  it('carry a header even when they are empty', () => {
    for (const text of [
      zonesCsv([]),
      seamsCsv([]),
      anchorsCsv([]),
      adjustmentsCsv([]),
      overlapsCsv([]),
      boundsCsv([]),
    ]) {
      expect(text.split('\r\n')).toHaveLength(2);
    }
  });

  it('leave a missing value empty: never NaN, Infinity or null', () => {
    const text = seamsCsv([seam]) + zonesCsv([{ ...zone, et_mean_mm: Number.NaN }]);
    expect(text).not.toMatch(/NaN|Infinity|null|undefined/);
    const [row] = read(seamsCsv([seam]));
    expect(row.ratio).toBe('');
    expect(row.limit).toBe('');
    expect(row.within_limit).toBe('');
    expect(read(zonesCsv([zone]))[0].reference_et_mm).toBe('');
  });

  it('name the unit of a seam from the product table', () => {
    expect(read(seamsCsv([seam]))[0].unit).toBe('mm');
  });

  it('never write a negative zero', () => {
    expect(read(seamsCsv([seam]))[0].mean_difference).toBe('0.000000');
    expect(fixedNumber(-0, 0)).toBe('0');
  });

  it('give the same bytes for the same rows, with decimals that do not depend on the value', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1e12, max: 1e12, noNaN: true }),
        fc.integer({ min: 0, max: 6 }),
        (value, decimals) => {
          const text = fixedNumber(value, decimals);
          expect(text).toMatch(decimals === 0 ? /^-?\d+$/ : new RegExp(`^-?\\d+\\.\\d{${decimals}}$`));
          expect(Math.abs(Number(text) - value)).toBeLessThanOrEqual(
            0.5000001 * 10 ** -decimals + 1e-9 * Math.abs(value),
          );
        },
      ),
    );
  });

  it('keep volume = mean depth x covered area to the printed digits', async () => {
    // 1 mm over 1 km2 is 1000 m3; 5.2 mm over 81 km2 (90 000 pixels of 30 m) is 421 200 m3.
    const [row] = read(zonesCsv([zone]));
    expect(Number(row.et_mean_mm) * Number(row.covered_area_km2) * 1000).toBeCloseTo(Number(row.et_volume_m3), 3);
    expect(row.et_volume_m3).toBe('421200.0');
  });

  it('list each anchor with its pass, role and reason', async () => {
    const [pass] = (await fixtureModel()).passes;
    const rows = anchorRows({
      passId: pass.passId,
      method: 'metric',
      slope: 0.34,
      zeroTemperature: 297,
      zeroAboveAir: 1,
      slopeSd: 0.01,
      zeroTemperatureSd: 0.2,
      anchors: pass.anchors,
      borrowedFrom: 'other-pass',
    });
    const read_ = read(anchorsCsv(rows));
    expect(read_.map(({ role }) => role)).toEqual(['cold', 'hot']);
    expect(read_[0]).toMatchObject({
      pass: pass.passId,
      borrowed_from: 'other-pass',
      surface_temperature_k: '296.800',
    });
    expect(read_[0].reason).toBe(pass.anchors[0].reason);
  });

  it('say of an overlap whether it was used, and why not', async () => {
    const rows = read(overlapsCsv((await fixtureModel()).adjustment?.overlaps ?? []));
    expect(rows.map(({ used }) => used)).toEqual(['true', 'false', 'true']);
    expect(rows[1].not_used_because).toContain('10 days');
  });
});

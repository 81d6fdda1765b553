import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  day,
  number,
  percent,
  periodName,
  signed,
  significant,
  tickText,
  unitText,
  volume,
} from '../../../services/mosaicker/report/numbers.ts';

const plain = (text: string): string => text.replaceAll('\u202f', ' ').replaceAll('\u2212', '-');

describe('numbers of the report', () => {
  it('group thousands and keep their decimals', () => {
    expect(plain(number(1234567.891, 2))).toBe('1 234 567.89');
    expect(plain(number(-999.5, 0))).toBe('-1 000');
  });

  it('never show a negative zero', () => {
    expect(number(-0.0001, 2)).toBe('0.00');
    expect(signed(0.00001, 3)).toBe('0.000');
    expect(signed(0.2, 1)).toBe('+0.2');
  });

  it('show what is missing as a dash', () => {
    for (const missing of [Number.NaN, Number.POSITIVE_INFINITY, undefined, null]) {
      expect(number(missing)).toBe('–');
      expect(percent(missing)).toBe('–');
      expect(significant(missing)).toBe('–');
    }
  });

  it('read back as the number they stand for', () => {
    fc.assert(
      fc.property(fc.double({ min: -1e9, max: 1e9, noNaN: true }), (value) => {
        expect(Number(plain(number(value, 3)).replaceAll(' ', ''))).toBeCloseTo(value, 2);
      }),
    );
  });

  it('never round a part to the whole, or something to nothing', () => {
    expect(plain(percent(0.9999))).toBe('> 99 %');
    expect(plain(percent(0.0001))).toBe('< 1 %');
    expect(plain(percent(0.0004, 1))).toBe('< 0.1 %');
    expect(plain(percent(1))).toBe('100 %');
    expect(plain(percent(0))).toBe('0 %');
    expect(plain(percent(0.714))).toBe('71 %');
  });

  it('write volumes in millions where they are large', () => {
    expect(plain(volume(421_200))).toBe('0.421 million m³');
    expect(plain(volume(1_240_000_000))).toBe('1 240 million m³');
    expect(plain(volume(5_120))).toBe('5 120 m³');
    expect(volume(Number.NaN)).toBe('–');
  });

  it('name dates, periods, units and ticks', () => {
    expect(day('2025-06-12')).toBe('12 June 2025');
    expect(periodName({ period: '2025-06', from: '2025-06-01', to: '2025-06-30' })).toBe('June 2025');
    expect(periodName({ period: '2025-04-01_2025-09-30', from: '2025-04-01', to: '2025-09-30' })).toBe(
      '1 April 2025 to 30 September 2025',
    );
    expect(unitText('W m-2')).toBe('W m⁻²');
    expect(tickText(0.05)).toBe('0.05');
  });
});

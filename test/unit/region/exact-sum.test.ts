import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ExactSum } from '../../../shared/region/exact-sum.ts';

const sumOf = (terms: readonly number[]) => {
  const sum = new ExactSum();
  for (const term of terms) sum.add(term);
  return sum;
};

/** Numbers of very different size, both signs, whole multiples of 2^-60: BigInt can check them. */
const term = fc
  .tuple(fc.integer({ min: -(2 ** 31), max: 2 ** 31 }), fc.integer({ min: -60, max: 60 }))
  .map(([mantissa, exponent]) => mantissa * 2 ** exponent);
const terms = fc.array(term, { maxLength: 60 });

/** The sum in units of 2^-60. */
const inUnits = (values: readonly number[]) => values.reduce((sum, value) => sum + units(value), 0n);

/** Exact: below 2^-7 the scaled value fits a double; above, the value itself is cut in two. */
function units(value: number): bigint {
  const whole = Math.trunc(value);
  return (BigInt(whole) << 60n) + BigInt((value - whole) * 2 ** 60);
}

describe('exact sums', () => {
  it('keeps what plain addition loses', () => {
    expect(sumOf([1e16, 1, -1e16]).value).toBe(1);
    expect(sumOf([1, 2 ** -60, -1]).value).toBe(2 ** -60);
    expect(sumOf([0.1, 0.2, 0.3, -0.6]).value).not.toBe(0);
    expect(sumOf([]).value).toBe(0);
    expect(sumOf([0, -0, 0]).parts).toEqual([]);
  });

  it('rounds ties by all the parts, not by the last two', () => {
    // 1 + 2^-53 lies half way between two doubles; the tiny rest decides.
    expect(sumOf([1, 2 ** -53, 2 ** -110]).value).toBe(1 + 2 ** -52);
    expect(sumOf([1, 2 ** -53, -(2 ** -110)]).value).toBe(1);
    expect(sumOf([1, 2 ** -53]).value).toBe(1);
  });

  it('is the correctly rounded sum, checked with whole numbers', () => {
    fc.assert(
      fc.property(terms, (values) => {
        const exact = inUnits(values);
        // BigInt to Number rounds to nearest, ties to even: the same rule.
        expect(sumOf(values).value + 0).toBe(Number(exact) / 2 ** 60 + 0);
      }),
    );
  });

  it('has the same parts in any order and grouping', () => {
    fc.assert(
      fc.property(terms, fc.array(fc.nat()), fc.nat({ max: 5 }), (values, keys, groups) => {
        const shuffled = values
          .map((value, i) => ({ value, key: keys[i] ?? 0 }))
          .sort((a, b) => a.key - b.key)
          .map(({ value }) => value);
        const merged = new ExactSum();
        for (let g = 0; g <= groups; g++) {
          const part = sumOf(shuffled.filter((_, i) => i % (groups + 1) === g));
          merged.merge(new ExactSum(JSON.parse(JSON.stringify(part.parts)) as number[]));
        }
        expect(merged.parts).toEqual(sumOf(values).parts);
        expect(inUnits(merged.parts)).toBe(inUnits(values));
      }),
    );
  });

  it('can be merged with itself', () => {
    const sum = sumOf([-5.627824748124671e-9, -8750193215063.8125, -0.0056947346399101595, -1057681571007465.5]);
    const { value } = sum;
    sum.merge(sum);
    expect(sum.value).toBe(2 * value);
  });
});

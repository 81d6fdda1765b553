import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { PERIOD_QUALITY } from '../../../shared/contract/quality.ts';
import { PeriodIntegrator } from '../../../shared/time/interpolate.ts';

interface Case {
  readonly days: number[];
  readonly fractions: number[];
  readonly from: number;
  readonly reference: number[];
  readonly maxGapDays: number;
  readonly maxHoldDays: number;
}

/** The definition, day by day. */
function naive({ days, fractions, from, reference, maxGapDays, maxHoldDays }: Case) {
  const usable = days.map((day, k) => ({ day, f: fractions[k] })).filter(({ f }) => !Number.isNaN(f));
  const to = from + reference.length - 1;
  const users = new Set<number>();
  let et = 0;
  let quality = 0;
  let run = 0;
  let longest = 0;
  for (let day = from; day <= to; day++) {
    const before = usable.findLast((o) => o.day <= day);
    const after = usable.find((o) => o.day > day);
    run = before?.day === day ? 0 : run + 1;
    longest = Math.max(longest, run);
    if (before?.day === day) {
      et += before.f * reference[day - from];
      users.add(day);
    } else if (before && after) {
      if (after.day - before.day > maxGapDays) quality |= PERIOD_QUALITY.gapTooLong;
      et += (before.f + ((after.f - before.f) * (day - before.day)) / (after.day - before.day)) * reference[day - from];
      users.add(before.day).add(after.day);
    } else {
      const held = before ?? after;
      if (!held) return { et: Number.NaN, observations: 0, longestGapDays: reference.length, quality: 1 };
      if (Math.abs(day - held.day) > maxHoldDays) quality |= PERIOD_QUALITY.gapTooLong;
      if (held.day > day) quality |= PERIOD_QUALITY.heldAtStart;
      if (held.day < day) quality |= PERIOD_QUALITY.heldAtEnd;
      et += held.f * reference[day - from];
      users.add(held.day);
    }
  }
  if (users.size === 1) quality |= PERIOD_QUALITY.singleObservation;
  const observations = usable.filter(({ day }) => day >= from && day <= to).length;
  return {
    et: quality & PERIOD_QUALITY.gapTooLong ? Number.NaN : et,
    observations,
    longestGapDays: longest,
    quality,
  };
}

function fast({ days, fractions, from, reference, maxGapDays, maxHoldDays }: Case) {
  const integrator = new PeriodIntegrator(days, from, from + reference.length - 1, maxGapDays, maxHoldDays);
  const sum = (weight: (k: number) => number) =>
    Float64Array.from(integrator.boundaryDays, (boundary) =>
      reference.slice(0, boundary - from).reduce((total, value, k) => total + value * weight(k), 0),
    );
  const out = { et: 0, observations: 0, longestGapDays: 0, quality: 0 };
  integrator.integrate(
    Float64Array.from(fractions),
    sum(() => 1),
    sum((k) => k),
    out,
  );
  return out;
}

const cases = fc
  .record({
    from: fc.integer({ min: 20000, max: 20010 }),
    reference: fc.array(fc.double({ min: 0, max: 12, noNaN: true }), { minLength: 1, maxLength: 40 }),
    offsets: fc.uniqueArray(fc.integer({ min: -30, max: 70 }), { maxLength: 12 }),
    fractions: fc.array(fc.oneof(fc.double({ min: 0, max: 1.3, noNaN: true }), fc.constant(Number.NaN)), {
      minLength: 12,
      maxLength: 12,
    }),
    maxGapDays: fc.integer({ min: 1, max: 60 }),
    maxHoldDays: fc.integer({ min: 0, max: 60 }),
  })
  .map(
    ({ offsets, ...rest }): Case => ({
      ...rest,
      days: offsets.map((offset) => rest.from + offset).sort((a, b) => a - b),
      fractions: rest.fractions.slice(0, offsets.length),
    }),
  );

describe('period ET from prefix sums', () => {
  test('equals the sum day by day, with the same flags', () => {
    fc.assert(
      fc.property(cases, (given) => {
        const expected = naive(given);
        const got = fast(given);
        expect({ ...got, et: 0 }).toEqual({ ...expected, et: 0 });
        if (Number.isNaN(expected.et)) expect(got.et).toBeNaN();
        else expect(Math.abs(got.et - expected.et)).toBeLessThan(1e-9 * (1 + Math.abs(expected.et)));
      }),
      { numRuns: 3000 },
    );
  });

  const base: Case = {
    days: [100, 110],
    fractions: [0.2, 0.7],
    from: 100,
    reference: Array(11).fill(6),
    maxGapDays: 10,
    maxHoldDays: 0,
  };

  test('a straight line over constant reference is the mean of its ends', () => {
    expect(fast(base)).toEqual({ et: expect.closeTo(0.45 * 66, 10), observations: 2, longestGapDays: 9, quality: 0 });
  });

  test('a gap one day longer than allowed gives no value', () => {
    const got = fast({ ...base, maxGapDays: 9 });
    expect(got.et).toBeNaN();
    expect(got.quality).toBe(PERIOD_QUALITY.gapTooLong);
  });

  test('a long gap that begins on the last day does not touch the period', () => {
    const given = { ...base, days: [100, 110, 190], fractions: [0.2, 0.7, 0.1] };
    expect(fast(given)).toEqual({ et: expect.closeTo(0.45 * 66, 10), observations: 2, longestGapDays: 9, quality: 0 });
  });

  test('a long gap that ends on the first day does not touch the period', () => {
    const given = { ...base, days: [20, 100, 110], fractions: [0.9, 0.2, 0.7] };
    expect(fast(given)).toEqual({ et: expect.closeTo(0.45 * 66, 10), observations: 2, longestGapDays: 9, quality: 0 });
  });

  test('one overpass is held to both ends and says so', () => {
    const got = fast({ ...base, fractions: [Number.NaN, 0.7], from: 108, reference: [5, 5, 5, 5], maxHoldDays: 2 });
    expect(got.et).toBeCloseTo(14, 10);
    const { heldAtStart, heldAtEnd, singleObservation } = PERIOD_QUALITY;
    expect(got.quality).toBe(heldAtStart | heldAtEnd | singleObservation);
    expect(got.longestGapDays).toBe(2);
  });

  test('no usable overpass gives no value', () => {
    const got = fast({ ...base, fractions: [Number.NaN, Number.NaN] });
    expect(got).toEqual({ et: Number.NaN, observations: 0, longestGapDays: 11, quality: PERIOD_QUALITY.noObservation });
  });

  test('months in a row add up to the whole', () => {
    const reference = Array.from({ length: 60 }, (_, k) => 4 + Math.sin(k));
    const days = [95, 104, 120, 133, 147, 170];
    const fractions = [0.9, 0.7, 0.2, 0.5, 1.1, 0.3];
    const shared = { days, fractions, maxGapDays: 40, maxHoldDays: 20 };
    const whole = fast({ ...shared, from: 100, reference }).et;
    const first = fast({ ...shared, from: 100, reference: reference.slice(0, 31) }).et;
    const second = fast({ ...shared, from: 131, reference: reference.slice(31) }).et;
    expect(first + second).toBeCloseTo(whole, 10);
  });

  test('unsorted days are refused', () => {
    expect(() => new PeriodIntegrator([110, 100], 100, 120, 10, 10)).toThrow(RangeError);
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Position } from '../../../shared/region/geometry.ts';
import { findCrossing } from '../../../shared/region/ring-crossing.ts';
import { closed, starRing } from './shapes.ts';

describe('crossings', () => {
  it.each<[string, Position[][], Position]>([
    ['a bow tie', [closed([0, 0], [2, 2], [2, 0], [0, 2])], [1, 1]],
    ['a bow tie with a vertex in the crossing', [closed([0, 0], [1, 1], [2, 2], [2, 0], [1, 1], [0, 2])], [1, 1]],
    ['a way out straight against the way in', [closed([0, 0], [1, 1], [2, 0], [3, 1], [2, 2], [1, 1], [1, 0])], [1, 1]],
    ['a way through a vertex of the ring', [closed([0, 0], [2, 2], [2, 0], [1, 1], [0, 2])], [1, 1]],
    ['a way through a side at a vertex', [closed([0, 0], [4, 0], [4, 2], [2, 0], [1, -2])], [2, 0]],
    [
      'a hole across the outer ring',
      [closed([0, 0], [4, 0], [4, 4], [0, 4]), closed([3, 1], [5, 1], [5, 1.5], [4, 2], [3, 2])],
      [4, 1],
    ],
  ])('finds %s, however the ring is written', (_, rings, at) => {
    for (const { ring, point } of writings(rings, at)) {
      const found = findCrossing(ring);
      expect(found?.ring).toBe(rings.length - 1);
      if (rings.length > 1) continue; // two crossings: either may be met first
      expect(found?.at[0]).toBeCloseTo(point[0], 9);
      expect(found?.at[1]).toBeCloseTo(point[1], 9);
    }
  });

  it.each<[string, Position[][]]>([
    ['a plain ring', [closed([0, 0], [2, 0], [2, 2], [0, 2])]],
    ['rings that touch in a vertex', [closed([0, 0], [4, 0], [4, 4], [0, 4]), closed([0, 0], [1, 2], [2, 1])]],
    ['a ring that touches its own side', [closed([0, 0], [4, 0], [4, 4], [2, 0], [0, 4])]],
    ['a ring that touches its own vertex', [closed([0, 0], [2, 1], [4, 0], [4, 4], [2, 1], [0, 4])]],
    ['a spike', [closed([0, 0], [2, 0], [5, 1], [2, 0], [2, 2], [0, 2])]],
    ['a hole along the outer ring', [closed([0, 0], [4, 0], [4, 4], [0, 4]), closed([1, 0], [1, 2], [2, 2], [2, 0])]],
    [
      'a vertex on a side, off by rounding',
      [closed([0, 0], [3, 1], [3, 3], [0, 3]), closed([0.3, 0.1 - 1e-16], [1, 2], [2, 2])],
    ],
  ])('does not take %s for one, however the ring is written', (_, rings) => {
    for (const { ring } of writings(rings, [0, 0])) expect(findCrossing(ring)).toBeNull();
  });

  it('bears rings of nothing', () => {
    expect(findCrossing([])).toBeNull();
    expect(findCrossing([[[1, 1]]])).toBeNull();
  });

  it('finds none in star-shaped rings, wherever they lie', () => {
    const place = fc.tuple(
      fc.double({ min: -150, max: 150, noNaN: true }),
      fc.double({ min: -60, max: 60, noNaN: true }),
    );
    fc.assert(
      fc.property(starRing, place, (ring, [x, y]) => {
        const moved = ring.map(([dx, dy]): Position => [x + dx / 10, y + dy / 10]);
        expect(findCrossing([[...moved.slice(0, -1), moved[0]]])).toBeNull();
      }),
    );
  });

  it('agrees with the comparison of every pair', () => {
    // Odd numbers over a prime keep random vertices off one another's sides.
    const coordinate = fc.integer({ min: -5000, max: 5000 }).map((value) => value / 101);
    fc.assert(
      fc.property(fc.array(fc.tuple(coordinate, coordinate), { minLength: 3, maxLength: 30 }), (points) => {
        const ring = closed(...points).filter(
          (p, i, all) => i === 0 || p[0] !== all[i - 1][0] || p[1] !== all[i - 1][1],
        );
        const distinct = new Set(points.map(String)).size === points.length;
        fc.pre(distinct);
        expect(findCrossing([ring]) !== null).toBe(anyPairCrosses(ring));
      }),
    );
  });

  it('compares near neighbours only', () => {
    // 40 000 corners round a narrow spiral: comparing all pairs would take 800 million steps.
    const out = Array.from({ length: 20_000 }, (_, k): Position => spiral(k, 0));
    const back = Array.from({ length: 20_000 }, (_, k): Position => spiral(19_999 - k, 0.01));
    expect(findCrossing([closed(...out, ...back)])).toBeNull();
    const bent = out.with(10_000, [30, 30]);
    expect(findCrossing([closed(...bent, ...back)])).not.toBeNull();
  });
});

/** The same rings from every first vertex, in both senses, mirrored and turned. */
function writings(rings: readonly Position[][], at: Position): { ring: Position[][]; point: Position }[] {
  const turns: ((p: Position) => Position)[] = [(p) => p, ([x, y]) => [-x, y], ([x, y]) => [y, x], ([x, y]) => [y, -x]];
  const starts = [0, 1, 2, 3, 4, 5, 6];
  return turns.flatMap((turn) =>
    starts.flatMap((start) =>
      [false, true].map((backward) => ({
        point: turn(at),
        ring: rings.map((ring) => {
          const open = ring.slice(0, -1).map(turn);
          const from = open.length === 0 ? 0 : start % open.length;
          const written = [...open.slice(from), ...open.slice(0, from)];
          return closed(...(backward ? written.toReversed() : written)) as Position[];
        }),
      })),
    ),
  );
}

function spiral(k: number, shift: number): Position {
  const angle = k / 200;
  const radius = 1 + angle / 60 + shift;
  return [radius * Math.cos(angle), radius * Math.sin(angle)];
}

/** The textbook test on exact integers: numerators of the coordinates over 101. */
function anyPairCrosses(ring: readonly Position[]): boolean {
  const exact = ring.map(([x, y]) => [BigInt(Math.round(x * 101)), BigInt(Math.round(y * 101))] as const);
  const turn = (a: number, b: number, c: number) => {
    const value =
      (exact[b][0] - exact[a][0]) * (exact[c][1] - exact[a][1]) -
      (exact[b][1] - exact[a][1]) * (exact[c][0] - exact[a][0]);
    return value > 0n ? 1 : value < 0n ? -1 : 0;
  };
  for (let i = 0; i + 1 < ring.length; i++) {
    for (let j = 0; j < i; j++) {
      if (turn(i, i + 1, j) * turn(i, i + 1, j + 1) < 0 && turn(j, j + 1, i) * turn(j, j + 1, i + 1) < 0) return true;
    }
  }
  return false;
}

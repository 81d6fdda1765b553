import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { clusterOf, crossEdge, SeamStats, SeamTable, scanSeams, takeEdges } from '../../../shared/anchors/seam.ts';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import { crop, tilesOf } from './planes.ts';
import { normal, seeded } from './random.ts';

const NODATA = -32768;
/** Where the images lie on the grid: not at a block corner, so clusters are cut too. */
const START = { row: 40, column: 168 };

interface Image {
  readonly rows: number;
  readonly columns: number;
  readonly plane: Int16Array;
  readonly origin: Uint16Array;
}

/** Noise, some nodata, and origins in the cells of a few random points. */
function patchwork(seed: number, rows: number, columns: number): Image {
  const random = seeded(seed);
  const points = Array.from({ length: 7 }, () => ({ row: rows * random(), column: columns * random() }));
  const plane = Int16Array.from({ length: rows * columns }, () =>
    random() < 0.03 ? NODATA : Math.floor(12_000 * random()) - 1000,
  );
  const origin = Uint16Array.from({ length: rows * columns }, (_, at) => {
    const distances = points.map((p) => (p.row - Math.floor(at / columns)) ** 2 + (p.column - (at % columns)) ** 2);
    return distances.indexOf(Math.min(...distances)) + 1;
  });
  return { rows, columns, plane, origin };
}

/** Seams of an image cut into tiles, as a mosaic is made: each tile for itself, then the edges. */
function measure(image: Image, tileSize: number) {
  const whole: PixelWindow = { ...START, rows: image.rows, columns: image.columns };
  const table = new SeamTable();
  const tileEdge = new SeamStats();
  const edges = new Map<string, ReturnType<typeof takeEdges>>();
  for (const tile of tilesOf(whole, tileSize)) {
    const plane = crop(image.plane, whole, tile);
    const origin = crop(image.origin, whole, tile);
    table.merge(scanSeams(plane, NODATA, origin, tile));
    const strips = takeEdges(plane, NODATA, origin, tile);
    edges.set(`${tile.row}:${tile.column}`, JSON.parse(JSON.stringify(strips)));
  }
  for (const [key, strips] of edges) {
    const [row, column] = key.split(':').map(Number);
    const below = edges.get(`${row + tileSize}:${column}`);
    const right = edges.get(`${row}:${column + tileSize}`);
    if (below) crossEdge(strips.bottom, below.top, NODATA, table, tileEdge);
    if (right) crossEdge(strips.right, right.left, NODATA, table, tileEdge);
  }
  return { seams: table.entries(), tileEdge };
}

/** The same by looking at every run of the image, one by one. */
function bruteForce({ rows, columns, plane, origin }: Image, tileSize: number) {
  const table = new SeamTable();
  let edgeRuns = 0;
  let edgeJump = 0;
  const look = (at: readonly number[], onEdge: boolean) => {
    const x = at.map((i) => plane[i]);
    const o = at.map((i) => origin[i]);
    if (x.includes(NODATA) || o[0] !== o[1] || o[2] !== o[3]) return;
    if (o[1] !== o[2]) {
      const cluster = clusterOf(START.row + Math.floor(at[1] / columns), START.column + (at[1] % columns));
      const seam = table.seam(Math.min(o[1], o[2]), Math.max(o[1], o[2]));
      seam.add(x[0], x[1], x[2], x[3], cluster, o[1] < o[2] ? 1 : -1);
    } else if (onEdge) {
      edgeRuns += 1;
      edgeJump += Math.abs(x[1] - x[2]);
    }
  };
  for (let r = 0; r < rows; r += 1) {
    for (let c = 0; c < columns; c += 1) {
      const run = (dr: number, dc: number) => [-1, 0, 1, 2].map((k) => (r + k * dr) * columns + c + k * dc);
      if (c >= 1 && c + 2 < columns) look(run(0, 1), (c + 1) % tileSize === 0);
      if (r >= 1 && r + 2 < rows) look(run(1, 0), (r + 1) % tileSize === 0);
    }
  }
  return { seams: table.entries(), edgeRuns, edgeJump };
}

const expectSame = (tiled: ReturnType<typeof measure>, expected: ReturnType<typeof bruteForce>) => {
  expect(tiled.seams).toEqual(expected.seams);
  const { count, meanJump } = tiled.tileEdge.result();
  expect(count).toBe(expected.edgeRuns);
  expect(meanJump * count).toBeCloseTo(expected.edgeJump, 4);
};

describe('tiling', () => {
  it('counts every run once, whatever the tile size', () => {
    fc.assert(
      fc.property(fc.integer(), (seed) => {
        const image = patchwork(seed, 64, 64);
        const whole = measure(image, 64);
        expect(whole.seams.length).toBeGreaterThan(2);
        expect(whole.tileEdge.result().count).toBe(0);
        for (const tileSize of [8, 16, 32]) {
          const tiled = measure(image, tileSize);
          expect(tiled.seams).toEqual(whole.seams);
          expectSame(tiled, bruteForce(image, tileSize));
          expect(tiled.tileEdge.result().count).toBeGreaterThan(0);
        }
      }),
      { numRuns: 12 },
    );
  });

  it('may leave a last tile of one or two rows or columns', () => {
    for (const [rows, columns] of [
      [33, 34],
      [17, 50],
    ]) {
      const image = patchwork(rows, rows, columns);
      expectSame(measure(image, 16), bruteForce(image, 16));
    }
  });
});

/** A smooth random field: noise averaged over a square of 2 reach + 1 pixels, in steps of 1e-4. */
function smoothField(seed: number, rows: number, columns: number, reach: number): Int16Array {
  const gauss = normal(seeded(seed));
  const wide = columns + 2 * reach;
  const noise = Float64Array.from({ length: (rows + 2 * reach) * wide }, () => gauss());
  return Int16Array.from({ length: rows * columns }, (_, at) => {
    let total = 0;
    for (let dr = 0; dr <= 2 * reach; dr += 1) {
      for (let dc = 0; dc <= 2 * reach; dc += 1) {
        total += noise[(Math.floor(at / columns) + dr) * wide + (at % columns) + dc];
      }
    }
    return 5000 + Math.round(200 * total);
  });
}

describe('the ratio of jumps', () => {
  const size = 256;
  const plane = smoothField(3, size, size, 4);

  it('is 1 across tile edges of a smooth field', () => {
    const image = { rows: size, columns: size, plane, origin: new Uint16Array(size * size).fill(1) };
    const { tileEdge, seams } = measure(image, 32);
    expect(seams).toEqual([]);
    const { ratio, count, meanDifference } = tileEdge.result();
    expect(count).toBe(2 * 7 * size);
    expect(ratio.low).toBeLessThan(1);
    expect(ratio.high).toBeGreaterThan(1);
    expect(ratio.high - ratio.low).toBeLessThan(0.2);
    expect(meanDifference.low).toBeLessThan(0);
    expect(meanDifference.high).toBeGreaterThan(0);
  });

  it('shows a step between two passes, with its size and sign', () => {
    const origin = Uint16Array.from({ length: size * size }, (_, at) => (at % size < 100 ? 9 : 4));
    const stepped = plane.map((value, at) => (origin[at] === 4 ? value + 3000 : value));
    const { seams } = measure({ rows: size, columns: size, plane: stepped, origin }, 32);
    expect(seams.map(({ a, b }) => [a, b])).toEqual([[4, 9]]);
    const { ratio, meanJump, meanDifference, count } = SeamStats.fromJSON(seams[0].stats).result(1e-4);
    expect(count).toBe(size);
    expect(ratio.low).toBeGreaterThan(2);
    expect(meanJump).toBeGreaterThan(0.25);
    // origin 4 minus origin 9
    expect(meanDifference.low).toBeGreaterThan(0.2);
    expect(meanDifference.high).toBeLessThan(0.4);
  });
});

describe('confidence', () => {
  it('holds in correlated fields about as often as it says', () => {
    // 100 seams through a field of noise averaged over 5 x 5 pixels; a 95 % interval taken run by run holds in 6 of 10
    let ratioHolds = 0;
    let differenceHolds = 0;
    for (let seed = 0; seed < 100; seed += 1) {
      const { ratio, meanDifference } = seamThrough(smoothField(1000 + seed, 4, 1024, 2), 1024).result();
      if (ratio.low < 1 && ratio.high > 1) ratioHolds += 1;
      if (meanDifference.low < 0 && meanDifference.high > 0) differenceHolds += 1;
    }
    expect(ratioHolds).toBeGreaterThanOrEqual(88);
    expect(differenceHolds).toBeGreaterThanOrEqual(88);
  });

  function seamThrough(plane: Int16Array, length: number): SeamStats {
    const stats = new SeamStats();
    for (let c = 0; c < length; c += 1) {
      const [x0, x1, x2, x3] = [0, 1, 2, 3].map((r) => plane[r * length + c]);
      stats.add(x0, x1, x2, x3, clusterOf(0, c));
    }
    return stats;
  }

  it('asks for five clusters', () => {
    const stats = new SeamStats();
    for (let i = 0; i < 4; i += 1) stats.add(0, 1, 2 + i, 3, i);
    expect(stats.result().ratio.low).toBe(Number.NaN);
    stats.add(0, 1, 2, 3, 4);
    expect(stats.result().ratio.low).toBeGreaterThan(0);
  });
});

describe('seam statistics', () => {
  const runs: [number, number, number, number, 1 | -1][] = [
    [0, 2, 5, 6, 1], // j 3, r 1.5, d -3
    [10, 8, 7, 9, 1], // j 1, r 2, d 1
    [4, 4, 4, 5, 1], // j 0, r 0.5, d 0
    [1, 1, 9, 9, -1], // j 8, r 0, d 8 turned round
    [2, 3, 3, 4, 1], // j 0, r 1, d 0
  ];
  const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);

  it('are what the definition says', () => {
    const stats = new SeamStats();
    runs.forEach(([x0, x1, x2, x3, sign], cluster) => {
      stats.add(x0, x1, x2, x3, cluster, sign);
    });
    const { count, meanJump, meanNeighbourJump, ratio, meanDifference } = stats.result(0.1);
    expect(count).toBe(5);
    expect(meanJump).toBeCloseTo(0.24, 12);
    expect(meanNeighbourJump).toBeCloseTo(0.1, 12);
    expect(ratio.value).toBeCloseTo(2.4, 12);
    const squares = sum([3 - 2.4 * 1.5, 1 - 2.4 * 2, -2.4 * 0.5, 8, -2.4].map((e) => e * e));
    expect(ratio.standardError).toBeCloseTo(Math.sqrt(((5 / 4) * squares) / 5 ** 2), 12);
    expect(meanDifference.value).toBeCloseTo(0.12, 12);
    const spread = sum([-3, 1, 0, 8, 0].map((d) => (d - 1.2) ** 2));
    expect(meanDifference.standardError).toBeCloseTo(0.1 * Math.sqrt(spread / 4 / 5), 12);
  });

  it('merge clusters of the same block and keep closed ones apart', () => {
    const add = (to: SeamStats, run: number, cluster: number) => {
      const [x0, x1, x2, x3, sign] = runs[run];
      to.add(x0, x1, x2, x3, cluster, sign);
    };
    const whole = new SeamStats();
    const parts = [new SeamStats(), new SeamStats()];
    for (let i = 0; i < 40; i += 1) {
      add(whole, i % 5, i % 7);
      add(parts[i % 2], i % 5, i % 7);
    }
    parts[0].merge(SeamStats.fromJSON(JSON.parse(JSON.stringify(parts[1]))));
    expect(parts[0].toJSON()).toEqual(whole.toJSON());
    const before = whole.result();
    whole.close();
    expect(whole.result()).toEqual(before);
    expect(SeamStats.fromJSON(JSON.parse(JSON.stringify(whole))).result()).toEqual(before);
    whole.merge(parts[0]);
    expect(whole.result().count).toBe(80);
    expect(whole.result().ratio.standardError).toBeLessThan(before.ratio.standardError);
  });

  it('are NaN without pairs', () => {
    expect(new SeamStats().result()).toMatchObject({ count: 0, meanJump: Number.NaN, ratio: { value: Number.NaN } });
  });

  it('refuse strips that do not meet', () => {
    const strip = (row: number, length: number) =>
      takeEdges(new Int16Array(4 * length), NODATA, new Uint8Array(4 * length), {
        row,
        column: 0,
        rows: 4,
        columns: length,
      });
    const cross = (row: number, length: number) =>
      crossEdge(strip(0, 4).bottom, strip(row, length).top, NODATA, new SeamTable(), new SeamStats());
    expect(() => cross(4, 4)).not.toThrow();
    expect(() => cross(8, 4)).toThrow(expect.objectContaining({ code: 'INTERNAL' }));
    expect(() => cross(4, 5)).toThrow(expect.objectContaining({ code: 'INTERNAL' }));
  });

  it('of a strip without data are empty', () => {
    const window = { row: 0, column: 0, rows: 4, columns: 4 };
    const { top } = takeEdges(new Int16Array(16).fill(NODATA), NODATA, new Uint16Array(16), window);
    expect(top).toMatchObject({ length: 4, values: [], origins: [] });
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import { buildLattice, expandLattice, expandRow, sampleLattice } from '../../../shared/region/lattice.ts';

const window = fc.record({
  row: fc.integer({ min: -40, max: 90 }),
  column: fc.integer({ min: -40, max: 90 }),
  rows: fc.integer({ min: 1, max: 50 }),
  columns: fc.integer({ min: 1, max: 50 }),
});
const step = fc.constantFrom(1, 3, 16, 64);

const wavy = (row: number, column: number, out: Float64Array) => {
  out[0] = Math.sin(row / 7) * Math.cos(column / 11);
  out[1] = 2 + 3 * row - 5 * column;
};

function expanded(part: PixelWindow, spacing: number, variable: number): Float64Array {
  const out = new Float64Array(part.rows * part.columns);
  expandLattice(buildLattice(part, spacing, 2, wavy), variable, part, out);
  return out;
}

describe('lattice', () => {
  it('is the same, bit for bit, in any window', () => {
    const wide: PixelWindow = { row: -50, column: -50, rows: 200, columns: 200 };
    const wholes = new Map([1, 3, 16, 64].map((spacing) => [spacing, expanded(wide, spacing, 0)]));
    fc.assert(
      fc.property(window, step, (part, spacing) => {
        const whole = wholes.get(spacing)!;
        const crop = Float64Array.from({ length: part.rows * part.columns }, (_, i) => {
          const row = part.row - wide.row + Math.floor(i / part.columns);
          return whole[row * wide.columns + part.column - wide.column + (i % part.columns)];
        });
        expect(expanded(part, spacing, 0)).toEqual(crop);
      }),
    );
  });

  it('reproduces a plane at the pixel centres', () => {
    fc.assert(
      fc.property(window, step, (part, spacing) => {
        expanded(part, spacing, 1).forEach((value, i) => {
          const [row, column] = [part.row + Math.floor(i / part.columns), part.column + (i % part.columns)];
          expect(value).toBeCloseTo(2 + 3 * (row + 0.5) - 5 * (column + 0.5), 9);
        });
      }),
    );
  });

  it('evaluates at global nodes only, each once', () => {
    const seen: string[] = [];
    buildLattice({ row: 15, column: -1, rows: 2, columns: 18 }, 16, 1, (row, column, out) => {
      seen.push(`${row},${column}`);
      out[0] = 0;
    });
    expect(seen).toEqual([0, 16, 32].flatMap((row) => [-16, 0, 16, 32].map((column) => `${row},${column}`)));
  });

  it('is bilinear between nodes', () => {
    const product = (row: number, column: number, out: Float64Array) => {
      out[0] = row * column;
    };
    const lattice = buildLattice({ row: 0, column: 0, rows: 4, columns: 4 }, 4, 1, product);
    expect(sampleLattice(lattice, 0, 1, 2)).toBe(1.5 * 2.5);
  });

  it('writes rows at an offset, also as 32-bit floats', () => {
    const part = { row: 5, column: 7, rows: 1, columns: 3 };
    const lattice = buildLattice(part, 16, 2, wavy);
    const out = new Float32Array(6).fill(-1);
    expandRow(lattice, 1, 5, 7, 3, out, 2);
    expect([...out]).toEqual([-1, -1, -19, -24, -29, -1]);
    expect(sampleLattice(lattice, 1, 5, 8)).toBe(-24);
  });

  it('carries NaN to every pixel of the cells that need the node', () => {
    const part = { row: 0, column: 0, rows: 1, columns: 12 };
    const lattice = buildLattice(part, 4, 1, (_, column, out) => {
      out[0] = column === 8 ? Number.NaN : 1;
    });
    const out = new Float64Array(12);
    expandLattice(lattice, 0, part, out);
    expect([...out].map(Number.isNaN)).toEqual([0, 0, 0, 0, 1, 1, 1, 1, 1, 1, 1, 1].map(Boolean));
  });
});

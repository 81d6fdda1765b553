import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { readCsv } from '../support/products.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';

type Row = Record<string, string>;

async function seamsOf(
  options: Parameters<typeof writeDemo>[1],
  ...settings: string[]
): Promise<{ seams: Row[]; overlaps: Row[] }> {
  const [folder, remove] = await temporaryFolder();
  try {
    await writeDemo(folder, options);
    const { exitCode, stderr } = await runCli('run', join(folder, 'basin.yaml'), '--threads', '2', ...settings);
    expect(exitCode, stderr).toBe(0);
    return {
      seams: await readCsv(join(folder, 'out/tables/seams.csv')),
      overlaps: await readCsv(join(folder, 'out/tables/overlaps.csv')),
    };
  } finally {
    await remove();
  }
}

/** Mean jump over mean neighbour jump of all seams together. */
function pooledRatio(rows: readonly Row[]): number {
  const sum = (key: string) => rows.reduce((total, row) => total + Number(row.count) * Number(row[key]), 0);
  return sum('mean_jump') / sum('mean_neighbour_jump');
}
const covers = (row: Row) => Number(row.ratio_ci_low) <= 1 && Number(row.ratio_ci_high) >= 1;

describe('edges inside a pass', () => {
  let seams: Row[];
  beforeAll(async () => {
    ({ seams } = await seamsOf({ seed: 1, size: 'demo' }));
  });

  it('tile edges cannot be told from the land around them', () => {
    const edges = seams.filter((row) => row.kind === 'tile-edge' && row.variable === 'et-fraction' && row.ratio_ci_low);
    const inside = edges.filter(covers).length;
    console.log(
      `tile edges: ${edges.length}, 1.00 within the interval of ${inside}, pooled ratio ${pooledRatio(edges).toFixed(3)}`,
    );
    expect(edges.length).toBeGreaterThan(20);
    expect(pooledRatio(edges)).toBeCloseTo(1, 1);
    // Intervals of 95 %: a few of many miss by chance, and the lines lie on the same ground on every date.
    expect(inside / edges.length).toBeGreaterThan(0.8);
  });

  it('scene edges cannot either', () => {
    const edges = seams.filter((row) => row.kind === 'scene-edge');
    console.log(
      edges
        .map((row) => `${row.when} ${row.stage} ${row.ratio} [${row.ratio_ci_low}, ${row.ratio_ci_high}]`)
        .join('\n'),
    );
    expect(edges.length).toBeGreaterThanOrEqual(4);
    for (const edge of edges) expect(covers(edge), `${edge.when} ${edge.ratio}`).toBe(true);
  });
});

describe('a pass that was calibrated wrong on purpose', () => {
  const date = '2025-07-07';
  let found: { seams: Row[]; overlaps: Row[] };
  beforeAll(async () => {
    found = await seamsOf({ seed: 2, size: 'small', calibrationError: { pass: date, fraction: 0.12 } });
  });

  it('differs from its neighbours before the adjustment, and by at most a third of it afterwards', () => {
    const links = found.overlaps.filter(
      (row) => row.used === 'true' && (row.first_pass.startsWith(date) || row.second_pass.startsWith(date)),
    );
    expect(links).toHaveLength(2);
    for (const link of links) {
      const [before, after] = [Math.abs(Number(link.difference_before)), Math.abs(Number(link.difference_after))];
      console.log(`${link.first_pass} | ${link.second_pass}: ${before} -> ${after}`);
      expect(before).toBeGreaterThan(0.08);
      expect(after).toBeLessThanOrEqual(before / 3);
    }
  });

  it('has both stages in the seam table, for overlaps and for the pass edges of the period maps', () => {
    for (const kind of ['pass-overlap', 'pass-edge']) {
      const rows = found.seams.filter((row) => row.kind === kind);
      expect(rows.filter((row) => row.stage === 'before').length, kind).toBeGreaterThan(0);
      expect(rows.filter((row) => row.stage === 'after').length, kind).toBe(
        rows.filter((row) => row.stage === 'before').length,
      );
    }
  });

  it('is left as it is, but still measured, when adjustment is switched off', async () => {
    const { overlaps } = await seamsOf(
      { seed: 2, size: 'tiny', calibrationError: { pass: date, fraction: 0.12 } },
      '--set',
      'method.adjust.use=false',
    );
    expect(overlaps.length).toBeGreaterThan(4);
    for (const row of overlaps) {
      expect(row.used).toBe('false');
      expect(row.difference_after).toBe(row.difference_before);
    }
  });
});

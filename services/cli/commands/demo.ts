import { resolve } from 'node:path';
import { compareTruth, type DemoTruth, truthZoneVolumes } from '../../../infra/demo/truth.ts';
import { writeDemo } from '../../../infra/demo/write-demo.ts';
import { EXIT } from '../../../shared/contract/exit-codes.ts';
import type { Plan } from '../../../shared/contract/plan.ts';
import { loadBasin } from '../../coordinator/load-basin.ts';
import { execute } from '../execute.ts';
import { readDay, readZoneVolumes } from '../read-products.ts';

export interface DemoCommandOptions {
  readonly seed: number;
  readonly size: 'demo' | 'small' | 'tiny';
  readonly threads?: number;
  readonly log: 'text' | 'json';
}

/** `basinloom demo`: writes the invented basin, runs it, and says how far the result is from its truth. */
export async function demo(folder: string, options: DemoCommandOptions): Promise<number> {
  process.stderr.write(`writing the invented basin Orrin (seed ${options.seed}) to ${folder}\n`);
  const truth = await writeDemo(folder, { seed: options.seed, size: options.size });
  const file = resolve(folder, 'basin.yaml');
  const basin = await loadBasin(file);
  const { exitCode, plan } = await execute(basin, {
    basinFile: file,
    log: options.log,
    ...(options.threads !== undefined && { threads: options.threads }),
  });
  if (!plan || (exitCode !== EXIT.ok && exitCode !== EXIT.completeWithGaps)) return exitCode;
  process.stdout.write(await comparison(truth, plan));
  process.stdout.write(`\nreport: ${folder}/out/report.html\n`);
  return exitCode;
}

/** Result against truth: every overpass date over clear pixels, and every zone's volume. */
async function comparison(truth: DemoTruth, plan: Plan): Promise<string> {
  const lines = [
    '',
    'against the truth of the invented basin',
    '',
    'date         pixels  truth mm/d  bias mm/d  bias %  RMSE mm/d',
  ];
  for (const date of [...new Set(plan.passes.map(({ pass }) => pass.date))].sort()) {
    const et = await readDay(plan, date);
    if (!et) continue;
    const { count, meanTruthMm, bias, biasPct, rmse } = compareTruth(truth, plan.grid, date, et);
    const cells = [
      String(count).padStart(7),
      fixed(meanTruthMm, 2, 10),
      fixed(bias, 3, 9),
      fixed(biasPct, 1, 6),
      fixed(rmse, 3, 9),
    ];
    lines.push(`${date}  ${cells.join('  ')}`);
  }
  lines.push('', 'zone              period    volume Mm3  truth Mm3  difference %');
  const results = await readZoneVolumes(plan);
  for (const period of new Set(results.map((row) => row.period))) {
    for (const { name, volumeM3 } of truthZoneVolumes(truth, period)) {
      const found = results.find((row) => row.zone === name && row.period === period);
      if (!found) continue;
      const difference = (100 * (found.volumeM3 - volumeM3)) / volumeM3;
      const cells = [fixed(found.volumeM3 / 1e6, 3, 10), fixed(volumeM3 / 1e6, 3, 9), fixed(difference, 2, 12)];
      lines.push(`${name.padEnd(16)}  ${period.padEnd(8)}  ${cells.join('  ')}`);
    }
  }
  return `${lines.join('\n')}\n`;
}

const fixed = (value: number, digits: number, width: number) => value.toFixed(digits).padStart(width);

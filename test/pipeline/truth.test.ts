import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { compareTruth, type DemoTruth, truthZoneVolumes } from '../../infra/demo/truth.ts';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { readDay, readZoneVolumes } from '../../services/cli/read-products.ts';
import { loadBasin } from '../../services/coordinator/load-basin.ts';
import { makePlan } from '../../services/coordinator/make-plan.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';

/**
 * Against the truth of the invented basin: its surface temperatures come from a forward energy balance of a known
 * evaporation, written without any code of the inversion.
 */
describe.each([1, 2, 3])('METRIC on the invented basin, seed %i', (seed) => {
  let remove: () => Promise<void>;
  let truth: DemoTruth;
  let plan: Plan;

  beforeAll(async () => {
    const [folder, removeFolder] = await temporaryFolder();
    remove = removeFolder;
    truth = await writeDemo(folder, { seed, size: 'small' });
    const { exitCode, stderr } = await runCli('run', `${folder}/basin.yaml`, '--threads', '2');
    expect(exitCode, stderr).toBe(0);
    plan = await makePlan(await loadBasin(`${folder}/basin.yaml`));
  });
  afterAll(() => remove());

  it('gives daily ET with a bias within 3 % and an RMSE within 0.35 mm over clear pixels', async () => {
    let dates = 0;
    for (const date of new Set(plan.passes.map(({ pass }) => pass.date))) {
      const et = await readDay(plan, date);
      if (!et) continue;
      dates++;
      const { count, biasPct, rmse } = compareTruth(truth, plan.grid, date, et);
      console.log(`seed ${seed} ${date}: ${count} pixels, bias ${biasPct.toFixed(2)} %, RMSE ${rmse.toFixed(3)} mm`);
      expect(count).toBeGreaterThan(20_000);
      expect(Math.abs(biasPct), date).toBeLessThan(3);
      expect(rmse, date).toBeLessThan(0.35);
    }
    expect(dates).toBeGreaterThan(5);
  });

  it('gives zone volumes within 3 %', async () => {
    const found = await readZoneVolumes(plan);
    for (const period of new Set(found.map((row) => row.period))) {
      for (const { name, volumeM3 } of truthZoneVolumes(truth, period)) {
        const row = found.find((candidate) => candidate.zone === name && candidate.period === period);
        expect(row, `${name} ${period}`).toBeDefined();
        expect(Math.abs((row?.volumeM3 ?? 0) / volumeM3 - 1), `${name} ${period}`).toBeLessThan(0.03);
      }
    }
  });
});

describe('SEBAL on the invented basin', () => {
  it('runs through; its ET follows the truth, lower where advection feeds the fields (it cannot see that)', async () => {
    const [folder, remove] = await temporaryFolder();
    const truth = await writeDemo(folder, { seed: 1, size: 'small' });
    const { exitCode, stderr } = await runCli(
      'run',
      `${folder}/basin.yaml`,
      '--set',
      'method.use=[sebal]',
      '--threads',
      '2',
    );
    expect(exitCode, stderr).toBe(0);
    const plan = await makePlan(await loadBasin(`${folder}/basin.yaml`));
    for (const date of ['2025-06-14', '2025-07-07']) {
      const et = await readDay(plan, date);
      const { correlation, biasPct } = compareTruth(truth, plan.grid, date, et ?? []);
      console.log(`SEBAL ${date}: correlation ${correlation.toFixed(3)}, bias ${biasPct.toFixed(1)} %`);
      expect(correlation).toBeGreaterThan(0.95);
      expect(Math.abs(biasPct)).toBeLessThan(25);
    }
    await remove();
  });
});

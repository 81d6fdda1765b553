import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { filesBelow, hashesBelow, pixelHashes } from '../support/products.ts';
import { runCli, temporaryFolder } from '../support/run-cli.ts';

let folder: string;
let remove: () => Promise<void>;
const out = (name: string) => join(folder, name);
const isProduct = (path: string) => path.endsWith('.tif');

async function run(name: string, ...options: string[]): Promise<void> {
  const { exitCode, stderr } = await runCli('run', join(folder, 'basin.yaml'), '--out', out(name), ...options);
  expect(exitCode, stderr).toBe(0);
}

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  await writeDemo(folder, { seed: 11, size: 'small' });
  await run('t256', '--set', 'grid.tile=256', '--threads', '2');
});
afterAll(() => remove());

describe('the same basin cut into other tiles', () => {
  it.each([128, 512])('has the same pixels with tiles of %i as with 256, at every overview level', async (tile) => {
    const name = `t${tile}`;
    await run(name, '--set', `grid.tile=${tile}`, '--threads', '2');
    const products = await filesBelow(out('t256/products'), isProduct);
    expect(products.length).toBeGreaterThan(10);
    expect(await filesBelow(out(`${name}/products`), isProduct)).toEqual(products);
    for (const product of products) {
      const expected = await pixelHashes(join(out('t256/products'), product));
      expect(await pixelHashes(join(out(`${name}/products`), product)), product).toEqual(expected);
    }
  });

  it('has the same zone and anchor tables', async () => {
    const tables = (path: string) => /zones\.csv|anchors\.csv|adjustments\.csv/.test(path);
    const expected = await hashesBelow(out('t256/tables'), tables);
    expect(Object.keys(expected)).toHaveLength(3);
    expect(await hashesBelow(out('t128/tables'), tables)).toEqual(expected);
    expect(await hashesBelow(out('t512/tables'), tables)).toEqual(expected);
  });
});

describe('the same basin on another number of threads', () => {
  it('gives byte-identical products, tables and report', async () => {
    await run('one-thread', '--set', 'grid.tile=256', '--threads', '1');
    const published = (path: string) => /^(products|tables)\/|^report\.html$/.test(path);
    const expected = await hashesBelow(out('t256'), published);
    expect(await hashesBelow(out('one-thread'), published)).toEqual(expected);
  });
});

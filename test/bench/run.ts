import { spawnSync } from 'node:child_process';
import { mkdtemp, readdir, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { encodeBlock } from '../../shared/raster/block.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster, type RasterSamples } from '../../shared/raster/raster-file.ts';
import type { BenchResult } from './result.ts';

const MAIN = fileURLToPath(new URL('../../services/cli/main.ts', import.meta.url));
const BLOCK = 256;

/**
 * A whole run on the demo basin against the floor: the time of only reading every input band once and only encoding
 * and writing every product once, in one thread, with the same reader and encoder.
 */
export async function runBench(): Promise<BenchResult> {
  const folder = await mkdtemp(join(tmpdir(), 'basinloom-bench-'));
  try {
    await writeDemo(folder, { seed: 1, size: 'demo' });
    const one = wholeRun(folder, 1);
    const two = wholeRun(folder, 2);
    const floor = await floorSeconds(folder);
    return {
      ratios: { 'run.floor': one / floor, 'run.two-threads': one / two },
      notes: [`run: ${one.toFixed(1)} s on one thread, ${two.toFixed(1)} s on two, floor ${floor.toFixed(1)} s`],
    };
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

function wholeRun(folder: string, threads: number): number {
  const start = performance.now();
  const out = join(folder, `out-${threads}`);
  const args = [MAIN, 'run', join(folder, 'basin.yaml'), '--out', out, '--threads', String(threads)];
  const { status, stderr } = spawnSync(process.execPath, args, { encoding: 'utf8' });
  if (status !== 0) throw new Error(`the run ended with ${status}: ${stderr}`);
  return (performance.now() - start) / 1000;
}

async function floorSeconds(folder: string): Promise<number> {
  const inputs = await tiffs(join(folder, 'scenes'));
  const products = await Promise.all((await tiffs(join(folder, 'out-1/products'))).map(readWhole));
  const start = performance.now();
  for (const input of inputs) await readWhole(input);
  for (const { samples, width, height } of products) {
    const bytes = Buffer.concat(encodeAll(samples, width, height));
    await writeFile(join(folder, 'floor.bin'), bytes);
  }
  return (performance.now() - start) / 1000;
}

async function tiffs(folder: string): Promise<string[]> {
  const entries = await readdir(folder, { recursive: true });
  return entries.filter((entry) => /\.tif$/i.test(entry)).map((entry) => join(folder, entry));
}

async function readWhole(path: string): Promise<{ samples: RasterSamples; width: number; height: number }> {
  const raster = await openRaster(await openFile(path));
  const { width, height } = raster.header;
  const samples = await raster.readWindow({ row: 0, column: 0, rows: height, columns: width });
  await raster.close();
  return { samples, width, height };
}

function encodeAll(samples: RasterSamples, width: number, height: number): Uint8Array[] {
  const blocks: Uint8Array[] = [];
  for (let y = 0; y < height; y += BLOCK) {
    for (let x = 0; x < width; x += BLOCK) {
      const block = new (samples.constructor as new (length: number) => RasterSamples)(BLOCK * BLOCK);
      const columns = Math.min(BLOCK, width - x);
      for (let r = 0; r < Math.min(BLOCK, height - y); r++) {
        const from = (y + r) * width + x;
        block.set(samples.subarray(from, from + columns) as never, r * BLOCK);
      }
      blocks.push(encodeBlock(block, BLOCK, 'deflate'));
    }
  }
  return blocks;
}

import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import { SOLAR_CONSTANT } from '../../shared/flux/constants.ts';
import { createFluxKernel, type FluxKernel, kernelUrl } from '../../shared/flux/kernel/flux-kernel.ts';
import { computePixel } from '../../shared/flux/methods/compute-pixel.ts';
import { metric } from '../../shared/flux/methods/metric.ts';
import { INPUT_PLANES, type InputPlane } from '../../shared/flux/planes.ts';
import { fillPlanes, PARAMETERS } from './kernel-input.ts';
import { type BenchResult, median } from './result.ts';

const PIXELS = 1 << 20;
/** Runs behind each rate. */
const RUNS = 5;
/** Yardstick and kernel take turns, so that other work on the machine meets both. */
const ROUNDS = 5;
/** Planes of the C form, in the order of its enumeration. */
const C_PLANES: readonly InputPlane[] = [
  'red',
  'nir',
  'albedo',
  'lst',
  'elevation',
  'sunUp',
  'airTemperatureDatum',
  'vapourPressure',
  'wind200',
  'referenceInst',
];

/** Pixels per second of the kernel against a plain C form, against the scalar reference, and on two threads. */
export async function kernelBench(): Promise<BenchResult> {
  const bytes = await readFile(kernelUrl);
  const kernel = await createFluxKernel(bytes, PIXELS);
  fillPlanes(kernel.inputs, PIXELS);
  const rates: number[] = [];
  const ours = () => {
    const found = rate(RUNS, PIXELS, () => kernel.run('metric', PIXELS, PARAMETERS));
    rates.push(found);
    return found;
  };
  const notes: string[] = [];
  const ratios: Record<string, number> = { 'kernel.scalar': await ratioOf(ours, () => scalarRate(kernel)) };
  const program = await cForm(kernel);
  if (typeof program === 'string') notes.push(`kernel.c128: ${program}`);
  else {
    ratios['kernel.c128'] = await ratioOf(ours, program.rate);
    await program.remove();
  }
  const pair = await twoThreads();
  ratios['kernel.two-threads'] = 1 / (await ratioOf(ours, pair.rate));
  await pair.stop();
  notes.unshift(`kernel: ${(median(rates) / 1e6).toFixed(1)} Mpx/s on one thread, METRIC on level land`);
  return { ratios, notes };
}

/** Median over the rounds of one rate over another. */
async function ratioOf(ours: () => number, theirs: () => number | Promise<number>): Promise<number> {
  const found: number[] = [];
  for (let round = 0; round < ROUNDS; round++) found.push(ours() / (await theirs()));
  return median(found);
}

/** Pixels per second: the median of some runs, after one that does not count. */
function rate(runs: number, pixels: number, work: () => void): number {
  work();
  const times = Array.from({ length: runs }, () => {
    const start = performance.now();
    work();
    return (performance.now() - start) / 1000;
  });
  return pixels / median(times);
}

/** The readable scalar form over some of the pixels. */
function scalarRate({ inputs }: FluxKernel): number {
  const count = PIXELS >> 6;
  const pixel = Object.fromEntries(INPUT_PLANES.map((name) => [name, 0])) as Record<InputPlane, number>;
  return rate(3, count, () => {
    for (let i = 0; i < count; i++) {
      for (const name of INPUT_PLANES) pixel[name] = inputs[name][i];
      computePixel(metric, pixel, PARAMETERS, PARAMETERS);
    }
  });
}

/** The C form, ready to run, when gcc is there and both agree; else why there is no figure. */
async function cForm(kernel: FluxKernel): Promise<string | { rate(): number; remove(): Promise<void> }> {
  if (spawnSync('gcc', ['--version']).status !== 0) return 'gcc is not installed';
  const folder = await mkdtemp(join(tmpdir(), 'basinloom-bench-'));
  const remove = () => rm(folder, { recursive: true, force: true });
  const [program, input, output] = ['kernel', 'in', 'out'].map((name) => join(folder, name));
  try {
    const source = fileURLToPath(new URL('./kernel.c', import.meta.url));
    // Without -fno-associative-math the compiler reorders (Ts - zero) + lapse z and loses the difference.
    const flags = ['-O3', '-msse4.2', '-ffast-math', '-fno-associative-math'];
    execFileSync('gcc', [...flags, '-o', program, source, '-lm']);
    const planes = C_PLANES.map((name) => Buffer.from(kernel.inputs[name].slice(0, PIXELS).buffer));
    const { slope, zeroTemperature, datumElevation, lapse, turbidity, inverseSquaredDistance } = PARAMETERS;
    const sun = SOLAR_CONSTANT * inverseSquaredDistance;
    const parameters = Float32Array.of(slope, zeroTemperature, datumElevation, lapse, turbidity, sun);
    await writeFile(input, Buffer.concat([...planes, Buffer.from(parameters.buffer)]));
    const run = () => Number(execFileSync(program, [input, output, String(PIXELS), String(RUNS)]).toString());
    run();
    kernel.run('metric', PIXELS, PARAMETERS);
    const theirs = new Float32Array(new Uint8Array(await readFile(output)).buffer);
    const different = theirs.filter((value, i) => !(Math.abs(value - kernel.outputs.dayFraction[i]) < 1e-3)).length;
    if (different === 0) return { rate: run, remove };
    await remove();
    return `the C form differs at ${different} pixels; no figure`;
  } catch (error) {
    await remove();
    throw error;
  }
}

/** Two threads, each with a kernel of its own; their rate is that of both together. */
async function twoThreads(): Promise<{ rate(): Promise<number>; stop(): Promise<unknown> }> {
  const file = new URL('./kernel-thread.ts', import.meta.url);
  const workers = [0, 1].map(() => new Worker(file, { workerData: { pixels: PIXELS } }));
  const next = () =>
    Promise.all(workers.map((worker) => new Promise<void>((resolve) => worker.once('message', () => resolve()))));
  await next();
  return {
    async rate() {
      const times: number[] = [];
      for (let run = 0; run < RUNS; run++) {
        const start = performance.now();
        const done = next();
        for (const worker of workers) worker.postMessage('run');
        await done;
        times.push((performance.now() - start) / 1000);
      }
      return (2 * PIXELS) / median(times);
    },
    stop: () => Promise.all(workers.map((worker) => worker.terminate())),
  };
}

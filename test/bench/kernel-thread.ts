import { readFile } from 'node:fs/promises';
import { parentPort, workerData } from 'node:worker_threads';
import { createFluxKernel, kernelUrl } from '../../shared/flux/kernel/flux-kernel.ts';
import { fillPlanes, PARAMETERS } from './kernel-input.ts';

/** One of the two threads of the kernel bench: computes its planes once for every message. */
const { pixels } = workerData as { pixels: number };
const kernel = await createFluxKernel(await readFile(kernelUrl), pixels);
fillPlanes(kernel.inputs, pixels);
kernel.run('metric', pixels, PARAMETERS);
parentPort?.on('message', () => {
  kernel.run('metric', pixels, PARAMETERS);
  parentPort?.postMessage('done');
});
parentPort?.postMessage('ready');

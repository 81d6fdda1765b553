import { readFile } from 'node:fs/promises';
import { createFluxKernel, type FluxKernel, kernelUrl } from '../../shared/flux/kernel/flux-kernel.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster, type RasterFile } from '../../shared/raster/raster-file.ts';
import { ArtefactReader } from '../../shared/store/artefact-reader.ts';

/** Open rasters kept by a thread: a pass has seven bands, and neighbouring tiles read the same files. */
const OPEN_RASTERS = 24;

/** What the jobs of one worker thread share: the store, the plan, the kernel and open files. */
export class WorkerContext extends ArtefactReader {
  #kernel: Promise<FluxKernel> | undefined;
  readonly #rasters = new Map<string, Promise<RasterFile>>();

  /** The flux kernel with room for one tile. */
  async kernel(pixels: number): Promise<FluxKernel> {
    this.#kernel ??= readFile(kernelUrl).then((bytes) => createFluxKernel(bytes, pixels));
    return this.#kernel;
  }

  /** An open raster, shared between jobs; the least recently used one is closed. */
  async raster(file: string): Promise<RasterFile> {
    const known = this.#rasters.get(file);
    const opened = known ?? openFile(file).then(openRaster);
    this.#rasters.delete(file);
    this.#rasters.set(file, opened);
    opened.catch(() => this.#rasters.delete(file));
    if (this.#rasters.size > OPEN_RASTERS) {
      const [oldest] = this.#rasters.keys();
      const closing = this.#rasters.get(oldest);
      this.#rasters.delete(oldest);
      await closing?.then((raster) => raster.close()).catch(() => {});
    }
    return opened;
  }

  /** Closes what is open; a job that still uses it fails and is done again. */
  async close(): Promise<void> {
    const open = [...this.#rasters.values()];
    this.#rasters.clear();
    await Promise.allSettled(open.map(async (raster) => (await raster).close()));
  }
}

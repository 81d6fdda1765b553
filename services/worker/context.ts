import { readFile } from 'node:fs/promises';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { BandFile } from '../../shared/contract/scene.ts';
import { createFluxKernel, type FluxKernel, kernelUrl } from '../../shared/flux/kernel/flux-kernel.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster, type RasterFile } from '../../shared/raster/raster-file.ts';
import { type DecodedPlanes, decodePlanes } from '../../shared/raster/tile-codec.ts';
import type { Store } from '../../shared/store/store.ts';

/** Open rasters kept by a thread: a pass has seven bands, and neighbouring tiles read the same files. */
const OPEN_RASTERS = 24;

/** What the jobs of one thread share: the store, the plan, the kernel and open files. */
export class WorkerContext {
  readonly store: Store;
  #plan: { key: string; plan: Promise<Plan> } | undefined;
  #kernel: Promise<FluxKernel> | undefined;
  readonly #rasters = new Map<string, Promise<RasterFile>>();

  constructor(store: Store) {
    this.store = store;
  }

  /** The plan of a key; the last one is kept. */
  async plan(key: string): Promise<Plan> {
    if (this.#plan?.key !== key) this.#plan = { key, plan: this.#readPlan(key) };
    return this.#plan.plan;
  }

  /** The flux kernel with room for one tile. */
  async kernel(pixels: number): Promise<FluxKernel> {
    this.#kernel ??= readFile(kernelUrl).then((bytes) => createFluxKernel(bytes, pixels));
    return this.#kernel;
  }

  /** Planes of an artefact that an earlier stage left. @throws BasinloomError ARTEFACT_CORRUPT, STORE_READ */
  async planes(key: string, wanted?: readonly string[]): Promise<DecodedPlanes> {
    const bytes = await this.store.get(key);
    if (!bytes) throw new BasinloomError('ARTEFACT_CORRUPT', { key, detail: 'it is missing from the store' });
    return decodePlanes(bytes, key, wanted);
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

  band(band: BandFile): Promise<RasterFile> {
    return this.raster(band.file);
  }

  async #readPlan(key: string): Promise<Plan> {
    const bytes = await this.store.get(key);
    if (!bytes) throw new BasinloomError('ARTEFACT_CORRUPT', { key, detail: 'the plan is missing from the store' });
    return JSON.parse(Buffer.from(bytes).toString('utf8')) as Plan;
  }
}

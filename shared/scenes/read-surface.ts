import type { GridSpec, PixelWindow } from '../contract/grid.ts';
import { DAY_QUALITY, DAY_UNUSABLE } from '../contract/quality.ts';
import type { BandFile, ReflectanceRole, SceneRecord } from '../contract/scene.ts';
import type { AlbedoWeights } from '../flux/albedo.ts';
import type { RasterFile, RasterSamples } from '../raster/raster-file.ts';
import { pixelTransform } from '../raster/transform.ts';
import { SOURCE_MARGIN, sourceWindow, warpBilinear, warpNearest } from '../raster/warp.ts';
import type { Lattice } from '../region/lattice.ts';
import { qaTables, SURFACE_ROLES, type SurfaceRole } from './qa.ts';
import { markInvalid } from './valid-input.ts';

/** The surface as one scene saw it, on a window of the grid. NaN wherever quality holds a bit of DAY_UNUSABLE. */
export interface SurfacePlanes {
  /** Surface reflectance. */
  readonly red: Float32Array;
  readonly nir: Float32Array;
  /** Broadband albedo: weighted sum of surface reflectance. */
  readonly albedo: Float32Array;
  /** Surface temperature, K. */
  readonly lst: Float32Array;
  /** Day quality bits; noScene where the scene has no pixel. */
  readonly quality: Uint16Array;
}

/** Bands that make albedo, in the order in which they are added. */
const ALBEDO_ROLES: readonly ReflectanceRole[] = ['blue', 'green', 'red', 'nir', 'swir1', 'swir2'];

/** Opens a band; the caller keeps and closes the file. */
export type OpenBand = (band: BandFile) => Promise<RasterFile>;

/**
 * Reads one scene on a window of the grid. Flags first; where they leave nothing to see, no other band is read.
 *
 * Pixels that are fill, cloud, shadow, snow, saturated or outside their physical range become nodata in all bands of
 * the source before the bilinear warp, so that no part of them enters a clear pixel. Flags are those of the nearest
 * source pixel. A pixel's value does not depend on the window.
 *
 * @returns null when the scene does not touch the window
 * @throws BasinloomError RASTER_TRUNCATED, RASTER_CORRUPT, RASTER_READ, and what `open` throws
 */
export async function readSurface(
  scene: SceneRecord,
  grid: GridSpec,
  window: PixelWindow,
  open: OpenBand,
  albedoWeights: AlbedoWeights,
  signal?: AbortSignal,
): Promise<SurfacePlanes | null> {
  const lattice = pixelTransform(grid, scene.georeference, window);
  const part = sourceWindow(lattice, window, scene.georeference, SOURCE_MARGIN);
  if (!part) return null;
  const read = async (band: BandFile): Promise<RasterSamples> => {
    signal?.throwIfAborted();
    return (await open(band)).readWindow(part);
  };
  const flags = await readFlags(scene, read);
  const quality = new Uint16Array(window.rows * window.columns);
  warpNearest({ ...part, data: flags }, lattice, window, quality, DAY_QUALITY.noScene);
  if (quality.every((bits) => bits === DAY_QUALITY.noScene)) return null;
  const planes = emptyPlanes(quality);
  if (quality.every(isUnusable)) return planes;

  const stored = {} as Record<SurfaceRole, RasterSamples>;
  for (const role of SURFACE_ROLES) stored[role] = await read(scene.bands[role]);
  markInvalid(stored, scene.bands, flags);
  warpNearest({ ...part, data: flags }, lattice, window, quality, DAY_QUALITY.noScene);
  warpBands({ scene, stored, flags, part, lattice, window, albedoWeights }, planes);
  agree(planes);
  return planes;
}

/** Day quality bits of the source pixels. */
async function readFlags(
  { bands, albedoModel }: SceneRecord,
  read: (band: BandFile) => Promise<RasterSamples>,
): Promise<Uint16Array> {
  const { pixel, radsat } = qaTables(albedoModel);
  const qaPixel = await read(bands['qa-pixel']);
  const qaRadsat = await read(bands['qa-radsat']);
  const flags = new Uint16Array(qaPixel.length);
  // The flags are 16 bits wide; a file of signed numbers holds the same bits.
  for (let i = 0; i < flags.length; i++) flags[i] = pixel[qaPixel[i] & 0xffff] | radsat[qaRadsat[i] & 0xffff];
  return flags;
}

interface WarpInput {
  readonly scene: SceneRecord;
  readonly stored: Readonly<Record<SurfaceRole, RasterSamples>>;
  readonly flags: Uint16Array;
  readonly part: PixelWindow;
  readonly lattice: Lattice;
  readonly window: PixelWindow;
  readonly albedoWeights: AlbedoWeights;
}

/** Fills the planes band by band, with one source and one target buffer for all. */
function warpBands(input: WarpInput, planes: SurfacePlanes): void {
  const { scene, stored, flags, part, lattice, window, albedoWeights } = input;
  const source = new Float32Array(flags.length);
  const scratch = new Float32Array(window.rows * window.columns);
  planes.albedo.fill(0);
  const warp = (role: SurfaceRole, out: Float32Array): Float32Array => {
    toPhysical(stored[role], scene.bands[role], flags, source);
    warpBilinear({ ...part, data: source }, lattice, window, out);
    return out;
  };
  warp('surface-temperature', planes.lst);
  for (const role of ALBEDO_ROLES) {
    const reflectance = warp(role, role === 'red' ? planes.red : role === 'nir' ? planes.nir : scratch);
    const weight = albedoWeights[role];
    for (let i = 0; i < reflectance.length; i++) planes.albedo[i] += weight * reflectance[i];
  }
}

function toPhysical(stored: RasterSamples, { scale, offset }: BandFile, flags: Uint16Array, out: Float32Array): void {
  for (let i = 0; i < out.length; i++) out[i] = isUnusable(flags[i]) ? Number.NaN : stored[i] * scale + offset;
}

/**
 * Flags and values come by two ways (nearest and bilinear) that could differ by a rounding at a pixel's edge: such a
 * pixel is not used, and says so.
 */
function agree({ red, nir, albedo, lst, quality }: SurfacePlanes): void {
  for (let i = 0; i < quality.length; i++) {
    if (!isUnusable(quality[i])) {
      if (!Number.isNaN(lst[i] + albedo[i])) continue;
      quality[i] |= DAY_QUALITY.invalidInput;
    }
    red[i] = Number.NaN;
    nir[i] = Number.NaN;
    albedo[i] = Number.NaN;
    lst[i] = Number.NaN;
  }
}

function emptyPlanes(quality: Uint16Array): SurfacePlanes {
  const plane = () => new Float32Array(quality.length).fill(Number.NaN);
  return { red: plane(), nir: plane(), albedo: plane(), lst: plane(), quality };
}

function isUnusable(quality: number): boolean {
  return (quality & DAY_UNUSABLE) !== 0;
}

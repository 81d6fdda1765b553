import type { MethodName } from '../../contract/calibration.ts';
import { SOLAR_CONSTANT } from '../constants.ts';
import type { CalibrationLine, PassParameters } from '../methods/method.ts';
import { INPUT_PLANES, type InputPlane, OUTPUT_PLANES, type OutputPlane } from '../planes.ts';
import { DAY_SAMPLES, sampleHourAngle, sampleSteepness } from '../radiation.ts';

/** The compiled kernel; made by build.ts. */
export const kernelUrl = new URL('./flux-kernel.wasm', import.meta.url);

export interface KernelParameters extends PassParameters, CalibrationLine {}

/**
 * The flux kernel with room for some pixels. Write the input planes, call `run`, read the output planes: they are
 * views of the kernel's memory and stay valid for as long as the kernel lives.
 */
export interface FluxKernel {
  readonly inputs: Readonly<Record<InputPlane, Float32Array>>;
  readonly outputs: Readonly<Record<OutputPlane, Float32Array>>;
  /**
   * Computes the first `pixels` pixels. A pixel's result does not depend on its place or on its neighbours; where an
   * input is NaN, the outputs that need it are NaN.
   */
  run(method: MethodName, pixels: number, parameters: KernelParameters): void;
}

type Chain = (
  inputs: number,
  outputs: number,
  stride: number,
  parameters: number,
  hours: number,
  scratch: number,
  blocks: number,
) => void;

interface KernelExports {
  readonly memory: WebAssembly.Memory;
  heapBase(): number;
  blockPixels(): number;
  readonly metricLevel: Chain;
  readonly metricTerrain: Chain;
  readonly sebalLevel: Chain;
  readonly sebalTerrain: Chain;
}

const PAGE = 65536;
/** Room between planes, so that equal pixels of different planes do not meet in the same cache set. */
const GAP_BYTES = 1088;
const PARAMETER_COUNT = 16;
const SCRATCH_ARRAYS = 11;

/** @param bytes of the file at `kernelUrl` @param capacity most pixels of one run */
export async function createFluxKernel(bytes: Uint8Array, capacity: number): Promise<FluxKernel> {
  const module = await WebAssembly.compile(bytes as Uint8Array<ArrayBuffer>);
  const instance = await WebAssembly.instantiate(module, {});
  const kernel = instance.exports as unknown as KernelExports;
  const block = kernel.blockPixels();
  const room = Math.ceil(capacity / block) * block;
  const stride = room * 4 + GAP_BYTES;
  const parametersAt = align(kernel.heapBase());
  const hoursAt = align(parametersAt + PARAMETER_COUNT * 4);
  const scratchAt = align(hoursAt + (DAY_SAMPLES / 2) * 12);
  const inputsAt = align(scratchAt + SCRATCH_ARRAYS * block * 4);
  const outputsAt = inputsAt + INPUT_PLANES.length * stride;
  const end = outputsAt + OUTPUT_PLANES.length * stride;
  const missing = Math.ceil(end / PAGE) - kernel.memory.buffer.byteLength / PAGE;
  if (missing > 0) kernel.memory.grow(missing);

  const { buffer } = kernel.memory;
  const views = <Name extends string>(names: readonly Name[], from: number) =>
    Object.fromEntries(
      names.map((name, index) => [name, new Float32Array(buffer, from + index * stride, room)]),
    ) as Record<Name, Float32Array>;
  const hours = new Float32Array(buffer, hoursAt, (DAY_SAMPLES / 2) * 3);
  for (let k = 0; k < DAY_SAMPLES / 2; k++) {
    const w = sampleHourAngle(k);
    hours.set([Math.cos(w), Math.sin(w), sampleSteepness(w)], 3 * k);
  }
  const parameters = new Float32Array(buffer, parametersAt, PARAMETER_COUNT);
  return {
    inputs: views(INPUT_PLANES, inputsAt),
    outputs: views(OUTPUT_PLANES, outputsAt),
    run(method, pixels, given) {
      parameters.set(parameterValues(given));
      const chain = kernel[`${method}${given.terrain ? 'Terrain' : 'Level'}`];
      chain(inputsAt, outputsAt, stride, parametersAt, hoursAt, scratchAt, Math.ceil(pixels / block));
    },
  };
}

/** In the order of the P_ constants of assembly/layout.ts. */
function parameterValues(given: KernelParameters): number[] {
  return [
    given.slope,
    given.zeroTemperature,
    given.datumElevation,
    given.lapse,
    given.turbidity,
    given.longwaveTemperature === 'surface' ? 1 : 0,
    SOLAR_CONSTANT * given.inverseSquaredDistance,
    Math.sin(given.declination),
    Math.cos(given.declination),
  ];
}

function align(at: number): number {
  return Math.ceil(at / 64) * 64;
}

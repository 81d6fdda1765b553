import type { FluxKernel, KernelParameters } from '../../shared/flux/kernel/flux-kernel.ts';
import type { InputPlane } from '../../shared/flux/planes.ts';

/** Calibration and options of the bench: a summer pass over an irrigated plain. */
export const PARAMETERS: KernelParameters = {
  slope: 0.21,
  zeroTemperature: 300.5,
  datumElevation: 300,
  lapse: 0.0065,
  turbidity: 1,
  longwaveTemperature: 'air',
  inverseSquaredDistance: 0.97,
  declination: 0.38,
  terrain: false,
};

/** Ranges of the planes; every pixel takes another place in them. */
const RANGES: Readonly<Record<InputPlane, readonly [number, number]>> = {
  red: [0.03, 0.25],
  nir: [0.2, 0.5],
  albedo: [0.12, 0.3],
  lst: [298, 325],
  elevation: [200, 700],
  slopeEast: [0, 0],
  slopeNorth: [0, 0],
  sunEast: [0.32, 0.33],
  sunNorth: [-0.18, -0.17],
  sunUp: [0.925, 0.93],
  sinLatitude: [0.55, 0.57],
  cosLatitude: [0.82, 0.84],
  extraterrestrialDay: [475, 485],
  airTemperatureDatum: [303, 307],
  vapourPressure: [1.2, 1.6],
  wind200: [4, 7],
  stationElevation: [300, 330],
  referenceInst: [0.75, 0.9],
  referenceDay: [8, 9],
  transmissivityDay: [0.7, 0.75],
};

export function fillPlanes(inputs: FluxKernel['inputs'], pixels: number): void {
  let stream = 0;
  for (const [name, [low, high]] of Object.entries(RANGES) as [InputPlane, readonly [number, number]][]) {
    stream++;
    const plane = inputs[name];
    for (let i = 0; i < pixels; i++) {
      const share = (Math.imul(i + 1, 2654435761 + 2 * stream) >>> 0) / 4294967296;
      plane[i] = low + (high - low) * share;
    }
  }
}

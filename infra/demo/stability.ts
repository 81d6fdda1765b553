/**
 * Stability corrections as what they are by definition: psi(zeta) = integral from 0 to zeta of (1 - phi(t)) / t dt,
 * with the Businger-Dyer functions phi_m = (1 - 16 t)^(-1/4), phi_h = (1 - 16 t)^(-1/2) in unstable air and
 * phi = 1 + 5 t in stable air. The integrals are summed numerically once and kept in a table over
 * y = ln(1 - 16 t), in which they are smooth; between the nodes the known derivative makes a cubic.
 */
const STEP = 0.02;
const NODES = 600;

interface Integral {
  readonly values: Float64Array;
  readonly slopes: Float64Array;
}

/** d psi / dy = (1 - exp(-power y)) / (1 - exp(-y)), from 1 - phi over t and dt / dy. */
function integralOf(power: number): Integral {
  const slope = (y: number) => (y === 0 ? power : (1 - Math.exp(-power * y)) / (1 - Math.exp(-y)));
  const values = new Float64Array(NODES + 1);
  const slopes = Float64Array.from({ length: NODES + 1 }, (_, k) => slope(k * STEP));
  for (let k = 1; k <= NODES; k++) {
    // Simpson's rule on four parts of each step.
    const at = (quarter: number) => slope((k - 1 + quarter / 4) * STEP);
    values[k] = values[k - 1] + (STEP / 12) * (at(0) + 4 * at(1) + 2 * at(2) + 4 * at(3) + at(4));
  }
  return { values, slopes };
}

const MOMENTUM = integralOf(1 / 4);
const HEAT = integralOf(1 / 2);

function evaluate({ values, slopes }: Integral, zeta: number): number {
  const position = Math.log(1 - 16 * zeta) / STEP;
  const k = Math.floor(position);
  const t = position - k;
  const difference = values[k + 1] - values[k];
  const a = slopes[k] * STEP - difference;
  const b = difference - slopes[k + 1] * STEP;
  return values[k] + t * difference + t * (1 - t) * (a * (1 - t) + b * t);
}

/** Stability correction of momentum. @param zeta height over Obukhov length */
export function psiMomentum(zeta: number): number {
  return zeta < 0 ? evaluate(MOMENTUM, zeta) : -5 * zeta;
}

export function psiHeat(zeta: number): number {
  return zeta < 0 ? evaluate(HEAT, zeta) : -5 * zeta;
}

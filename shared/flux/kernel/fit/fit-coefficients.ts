import { writeFileSync } from 'node:fs';
import { Matrix, solve } from 'ml-matrix';

/**
 * Fits the polynomials of the kernel's elementary functions and the rational functions of its stability terms, and
 * writes them as AssemblyScript: `node shared/flux/kernel/fit/fit-coefficients.ts`. Interpolation at Chebyshev nodes is
 * within a small factor of the best fit; the error stated beside each is measured on a dense set of points.
 */
interface PolynomialFit {
  readonly name: string;
  readonly meaning: string;
  readonly degree: number;
  readonly low: number;
  readonly high: number;
  readonly value: (x: number) => number;
}

/** (ln(1 + t) - t) / t^2 by its series near 0, where the closed form cancels. */
const lnTail = (t: number) => (Math.abs(t) < 1e-4 ? -0.5 + t / 3 - (t * t) / 4 : (Math.log1p(t) - t) / (t * t));
const expTail = (r: number) => (Math.abs(r) < 1e-4 ? 0.5 + r / 6 + (r * r) / 24 : (Math.expm1(r) - r) / (r * r));
const atanShape = (s: number) => (s < 1e-8 ? 1 - s / 3 : Math.atan(Math.sqrt(s)) / Math.sqrt(s));

const POLYNOMIALS: readonly PolynomialFit[] = [
  { name: 'LN', meaning: '(ln(1+t) - t) / t^2 in t', degree: 8, low: -1 / 3, high: 1 / 3, value: lnTail },
  {
    name: 'EXP',
    meaning: '(e^r - 1 - r) / r^2 in r',
    degree: 4,
    low: -Math.LN2 / 2,
    high: Math.LN2 / 2,
    value: expTail,
  },
  {
    name: 'PRESSURE',
    meaning: '(1 - r)^5.26 in r = 0.0065 z / 293, z from -500 to 9000 m',
    degree: 5,
    low: (-500 * 0.0065) / 293,
    high: (9000 * 0.0065) / 293,
    value: (r) => (1 - r) ** 5.26,
  },
  { name: 'ATAN', meaning: 'atan(x) / x in s = x^2', degree: 8, low: 0, high: 1, value: atanShape },
];

function fitPolynomial({ degree, low, high, value }: PolynomialFit): { coefficients: number[]; error: number } {
  const nodes = Array.from({ length: degree + 1 }, (_, k) => {
    const node = Math.cos((Math.PI * (k + 0.5)) / (degree + 1));
    return (low + high) / 2 + ((high - low) / 2) * node;
  });
  const powers = new Matrix(nodes.map((x) => Array.from({ length: degree + 1 }, (_, p) => x ** p)));
  const solved = solve(powers, Matrix.columnVector(nodes.map(value))).to1DArray();
  const coefficients = solved.map(Math.fround);
  let error = 0;
  for (let k = 0; k <= 20000; k++) {
    const x = low + ((high - low) * k) / 20000;
    const polynomial = coefficients.reduceRight((sum, c) => sum * x + c, 0);
    error = Math.max(error, Math.abs(polynomial - value(x)));
  }
  return { coefficients, error };
}

/** P(t) / Q(t) on 0 .. high, Q(0) = 1. */
interface RationalFit {
  readonly name: string;
  readonly meaning: string;
  readonly numerator: number;
  readonly denominator: number;
  readonly high: number;
  /** Nodes are Chebyshev's in t / (t + scale): functions of this kind bend near 0 and flatten far out. */
  readonly scale: number;
  readonly value: (t: number) => number;
  /** The error that is stated: that of P / Q times a weight. */
  readonly errorOf: string;
  readonly weight: (t: number) => number;
}

/** psi_m of unstable air (aerodynamics.ts) with x = 1 + t, t = (1 + 200 w)^(1/4) - 1 and w = -16 / L, over t. */
const momentumShape = (t: number) => {
  const x = 1 + t;
  const psi = 2 * Math.log1p(t / 2) + Math.log1p((x * x - 1) / 2) - 2 * Math.atan(x) + Math.PI / 2;
  return t < 1e-6 ? 1 : psi / t;
};
/** ln(z2 / z1) - psi_h(z2) + psi_h(z1) of unstable air with t = (1 + 2 w)^(1/2) - 1. */
const heatProfile = (t: number) => {
  const lower = Math.sqrt(1 + (t * t + 2 * t) / 20);
  return Math.log(20) - 2 * Math.log((2 + t) / (1 + lower));
};

/** Largest w of the fits: an Obukhov length of -1 cm. */
const HIGHEST_W = 1600;
const RATIONALS: readonly RationalFit[] = [
  {
    name: 'MOMENTUM',
    meaning: 'psi_m / t in t = (1 + 200 w)^(1/4) - 1',
    numerator: 4,
    denominator: 5,
    high: (1 + 200 * HIGHEST_W) ** 0.25 - 1,
    scale: 9,
    value: momentumShape,
    errorOf: 'error of psi_m',
    weight: (t) => t,
  },
  {
    name: 'HEAT',
    meaning: 'ln(z2 / z1) - psi_h(z2) + psi_h(z1) in t = (1 + 2 w)^(1/2) - 1',
    numerator: 4,
    denominator: 5,
    high: Math.sqrt(1 + 2 * HIGHEST_W) - 1,
    scale: 4,
    value: heatProfile,
    errorOf: 'relative error',
    weight: (t) => 1 / heatProfile(t),
  },
];

function fitRational(fit: RationalFit): { above: number[]; below: number[]; error: number } {
  const { numerator, denominator, high, scale, value, weight } = fit;
  const count = numerator + denominator + 1;
  const nodes = Array.from({ length: count }, (_, k) => {
    const share = ((1 - Math.cos((Math.PI * (k + 0.5)) / count)) / 2) * (high / (high + scale));
    return (scale * share) / (1 - share);
  });
  // P(t) - value(t) (Q(t) - 1) = value(t) at every node; t over the scale, so that the powers stay near 1.
  const powers = (t: number, from: number, to: number) =>
    Array.from({ length: to - from + 1 }, (_, k) => (t / scale) ** (from + k));
  const rows = nodes.map((t) => [
    ...powers(t, 0, numerator),
    ...powers(t, 1, denominator).map((power) => -value(t) * power),
  ]);
  const solved = solve(new Matrix(rows), Matrix.columnVector(nodes.map(value))).to1DArray();
  const unscaled = (list: number[]) => list.map((c, k) => Math.fround(c / scale ** k));
  const above = unscaled(solved.slice(0, numerator + 1));
  const below = unscaled([1, ...solved.slice(numerator + 1)]);
  const horner = (list: number[], t: number) => list.reduceRight((sum, c) => sum * t + c, 0);
  let error = 0;
  for (let k = 0; k <= 20000; k++) {
    const t = high * (k / 20000) ** 2;
    error = Math.max(error, Math.abs(horner(above, t) / horner(below, t) - value(t)) * weight(t));
  }
  return { above, below, error };
}

const lines = ['// Generated by fit/fit-coefficients.ts: do not edit.', ''];
const coefficients = (name: string, values: number[]) =>
  values.map((value, k) => `export const ${name}_${k}: f32 = ${value};`);
for (const one of POLYNOMIALS) {
  const { coefficients: found, error } = fitPolynomial(one);
  lines.push(
    `// ${one.meaning}, ${one.low.toFixed(4)} .. ${one.high.toFixed(4)}; largest error ${error.toExponential(1)}`,
    ...coefficients(one.name, found),
    '',
  );
}
for (const one of RATIONALS) {
  const { above, below, error } = fitRational(one);
  lines.push(
    `// ${one.meaning}, w 0 .. ${HIGHEST_W}; largest ${one.errorOf} ${error.toExponential(1)}`,
    ...coefficients(`${one.name}_P`, above),
    ...coefficients(`${one.name}_Q`, below),
    '',
  );
}
writeFileSync(new URL('../assembly/coefficients.ts', import.meta.url), `${lines.join('\n').trimEnd()}\n`);
process.stdout.write(`${lines.filter((line) => line.startsWith('//')).join('\n')}\n`);

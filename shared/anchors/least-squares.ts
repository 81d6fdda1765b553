import { CholeskyDecomposition, Matrix } from 'ml-matrix';
import { BasinloomError } from '../contract/errors.ts';

/** One weighted equation: sum of coefficient times unknown = target, with standard deviation sigma. */
export interface Equation {
  readonly terms: readonly (readonly [unknown: number, coefficient: number])[];
  readonly target: number;
  readonly sigma: number;
}

/** Residual, in sigmas, beyond which Huber's loss grows linearly: 95 % efficient for normal errors. */
export const HUBER_K = 1.345;

const MAX_ITERATIONS = 200;
/** Far below the 1e-4 in which fractions are stored. */
const TOLERANCE = 1e-10;

/**
 * Minimises sum rho(residual / sigma) + sum precision x^2, where rho is Huber's loss (Huber 1964, Ann. Math.
 * Statist. 35:73-101), by iteratively reweighted least squares. The problem is convex: one minimum.
 *
 * @param precision of the prior N(0, 1 / precision) of each unknown; 0 for none
 * @param huberK Infinity gives plain weighted least squares
 * @throws INTERNAL when equations and priors do not fix every unknown.
 */
export function solveLeastSquares(
  equations: readonly Equation[],
  precision: readonly number[],
  huberK: number = HUBER_K,
): number[] {
  if (precision.length === 0) return [];
  let solution = solveWeighted(equations, precision, () => 1);
  if (!Number.isFinite(huberK)) return solution;
  for (let iteration = 0; iteration < MAX_ITERATIONS; iteration += 1) {
    const previous = solution;
    solution = solveWeighted(equations, precision, (equation) => {
      const residual = Math.abs(residualOf(equation, previous)) / equation.sigma;
      return residual <= huberK ? 1 : huberK / residual;
    });
    if (solution.every((value, i) => Math.abs(value - previous[i]) <= TOLERANCE)) break;
  }
  return solution;
}

const residualOf = ({ terms, target }: Equation, solution: readonly number[]): number =>
  terms.reduce((sum, [unknown, coefficient]) => sum + coefficient * solution[unknown], -target);

/** Solves the normal equations by Cholesky decomposition. */
function solveWeighted(
  equations: readonly Equation[],
  precision: readonly number[],
  robustWeight: (equation: Equation) => number,
): number[] {
  const normal = Matrix.diag([...precision]);
  const right = Matrix.zeros(precision.length, 1);
  for (const equation of equations) {
    const weight = robustWeight(equation) / equation.sigma ** 2;
    for (const [i, a] of equation.terms) {
      right.set(i, 0, right.get(i, 0) + weight * a * equation.target);
      for (const [j, b] of equation.terms) normal.set(i, j, normal.get(i, j) + weight * (a * b));
    }
  }
  const cholesky = new CholeskyDecomposition(normal);
  if (!cholesky.isPositiveDefinite()) {
    throw new BasinloomError('INTERNAL', { detail: 'least squares: the equations do not fix every unknown' });
  }
  return cholesky.solve(right).to1DArray();
}

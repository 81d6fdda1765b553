import { describe, expect, it } from 'vitest';
import {
  HEIGHT_RATIO,
  heatTransfer,
  profileTerms,
  psiHeatUnstable,
  psiMomentumUnstable,
  psiStable,
} from '../../shared/flux/aerodynamics.ts';

/** Integral of (1 - phi(s)) / s from 0 to zeta, by Simpson's rule in ln(-s). */
function integrated(phi: (zeta: number) => number, zeta: number): number {
  const steps = 20_000;
  const [low, high] = [Math.log(1e-9), Math.log(-zeta)];
  const h = (high - low) / steps;
  let sum = 0;
  for (let k = 0; k <= steps; k++) {
    const weight = k === 0 || k === steps ? 1 : k % 2 ? 4 : 2;
    sum += weight * (1 - phi(-Math.exp(low + k * h)));
  }
  return (sum * h) / 3;
}

/**
 * Businger-Dyer gradients with gamma 16 (Dyer & Hicks 1970; Paulson 1970, J. Appl. Meteorol. 9:857): the closed forms
 * must be the integrals of the gradients. This is a check by calculus, not by anybody's numbers.
 */
describe('stability corrections against the gradients that define them', () => {
  it.each([-0.005, -0.1, -0.2, -1, -4, -20])('zeta %f', (zeta) => {
    expect(psiMomentumUnstable(zeta)).toBeCloseTo(
      integrated((z) => (1 - 16 * z) ** -0.25, zeta),
      6,
    );
    expect(psiHeatUnstable(zeta)).toBeCloseTo(
      integrated((z) => (1 - 16 * z) ** -0.5, zeta),
      6,
    );
  });

  it('stable air: -5 zeta (Webb 1970, Q. J. R. Meteorol. Soc. 96:67)', () => {
    expect(psiStable(0.1)).toBe(-0.5);
  });

  // Regression: computed once in double precision.
  it.each([
    [2, -10, 0.46126, 0.843589],
    [2, -50, 0.135438, 0.262605],
    [0.1, -10, 0.038146, 0.075586],
    [200, -50, 1.92176, 3.021942],
  ])('regression: z %f, L %f', (z, l, momentum, heat) => {
    expect(psiMomentumUnstable(z / l)).toBeCloseTo(momentum, 5);
    expect(psiHeatUnstable(z / l)).toBeCloseTo(heat, 5);
  });
});

describe('profile terms', () => {
  it('are those of neutral air at w = 0, whichever side it is approached from', () => {
    const neutral = profileTerms(0, 8);
    expect(neutral).toEqual({ a: 8, b: HEIGHT_RATIO });
    for (const w of [-1e-9, 1e-9]) {
      expect(profileTerms(w, 8).a).toBeCloseTo(8, 6);
      expect(profileTerms(w, 8).b).toBeCloseTo(HEIGHT_RATIO, 6);
    }
  });
});

describe('heat transfer', () => {
  it('satisfies the definition of the Obukhov length: L = -rho cp u*^3 Ts / (k g H)', () => {
    for (const [dT, surfaceK, wind, roughness] of [
      [4.6, 322, 6.3, 0.005],
      [-0.4, 298, 6.3, 0.072],
      [9, 325, 1.6, 0.01],
      [0.2, 300, 12, 0.1],
    ]) {
      const { resistance, frictionVelocity, obukhovLength } = heatTransfer(dT, surfaceK, wind, roughness);
      const byDefinition = (-(frictionVelocity ** 3) * surfaceK * resistance) / (0.41 * 9.81 * dT);
      expect(obukhovLength / byDefinition).toBeCloseTo(1, 9);
    }
  });

  it('in neutral air is the logarithmic profile: u* = k u / ln(z / z0m), rah = ln(z2 / z1) / (k u*) (textbook)', () => {
    const { resistance, frictionVelocity } = heatTransfer(0, 300, 5, 0.05);
    const friction = (0.41 * 5) / Math.log(200 / 0.05);
    expect(frictionVelocity).toBeCloseTo(friction, 12);
    expect(resistance).toBeCloseTo(Math.log(20) / (0.41 * friction), 9);
  });
});

import { radiationRatio, slopeDayFactor, sloping } from './day';
import { all, div, mul, mulAdd, pick, sub } from './lanes';
import * as M from './layout';
import { sensibleHeat } from './stability';

// Fourth stage: heat fluxes and the day's fraction of four pixels.

/** Latent heat of vaporisation, MJ kg-1. */
// @ts-ignore: decorator
@inline function vaporisationHeat(lst: v128): v128 {
  return sub(all(2.501), mul(sub(lst, all(273.15)), all(0.00236)));
}

// @ts-ignore: decorator
@inline export function fluxStage(
  inputs: usize, outputs: usize, stride: usize, params: usize, hours: usize, scr: usize, at: usize, in_: usize,
  metric: bool, terrain: bool,
): void {
  const rn = M.plane(outputs, stride, M.NET_RADIATION, at);
  const available = sub(rn, M.plane(outputs, stride, M.SOIL_HEAT, at));
  const h = sensibleHeat(scr, in_);
  const le = sub(available, h);
  const ef = div(le, available);
  const lambda = vaporisationHeat(M.plane(inputs, stride, M.LST, at));
  let day: v128;
  if (metric) {
    // 3600 s of LE over lambda (J kg-1) and the reference in mm h-1.
    day = div(mul(le, all(0.0036)), mul(lambda, M.plane(inputs, stride, M.REFERENCE_INST, at)));
    if (terrain) day = mul(day, radiationRatio(inputs, stride, params, hours, at));
  } else {
    let sun = M.plane(inputs, stride, M.EXTRATERRESTRIAL_DAY, at);
    if (terrain) {
      const slopes = sloping(inputs, stride, at);
      if (v128.any_true(slopes)) {
        sun = pick(slopes, mul(sun, slopeDayFactor(inputs, stride, params, hours, at)), sun);
      }
    }
    const tau = M.plane(inputs, stride, M.TRANSMISSIVITY_DAY, at);
    const absorbed = mul(sub(all(1), M.plane(inputs, stride, M.ALBEDO, at)), sun);
    const netDay = mul(tau, sub(absorbed, all(110)));
    day = div(mul(mul(ef, netDay), all(0.0864)), mul(lambda, M.plane(inputs, stride, M.REFERENCE_DAY, at)));
  }
  M.write(outputs, stride, M.SENSIBLE_HEAT, at, h);
  M.write(outputs, stride, M.LATENT_HEAT, at, le);
  M.write(outputs, stride, M.EVAPORATIVE_FRACTION, at, ef);
  M.write(outputs, stride, M.DAY_FRACTION, at, day);
}

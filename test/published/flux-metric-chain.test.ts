import { describe, expect, it } from 'vitest';
import { airDensity, heatTransfer } from '../../shared/flux/aerodynamics.ts';
import { calibrateLine } from '../../shared/flux/calibrate.ts';
import { computePixel } from '../../shared/flux/methods/compute-pixel.ts';
import { type PassParameters, vaporisationHeat } from '../../shared/flux/methods/method.ts';
import { metric } from '../../shared/flux/methods/metric.ts';
import { sebal } from '../../shared/flux/methods/sebal.ts';
import type { PixelInputs } from '../../shared/flux/planes.ts';

/**
 * A METRIC chain after Allen, Tasumi & Trezza 2007, worked once in double precision with an independent program
 * (regression: no published example carries all its digits). Day 200, 1200 m, ea 1.5 kPa, sun 30 degrees from the
 * zenith, air at 298 K, 3 m/s at 2 m over z0m 0.03 m, tall reference ET 0.80 mm/h and 8.0 mm/d.
 */
const ELEVATION = 1200;
const LAPSE = 0.0065;
const parameters: PassParameters = {
  datumElevation: ELEVATION,
  lapse: LAPSE,
  turbidity: 1,
  longwaveTemperature: 'air',
  inverseSquaredDistance: 1 + 0.033 * Math.cos((2 * Math.PI * 200) / 365),
  declination: 0.36,
  terrain: false,
};

/** The red reflectance whose SAVI (L 0.1) gives a leaf area index, by Allen et al. 2007 eq. 18 turned round. */
function redOf(lai: number, nir: number): number {
  const savi = 0.69 - 0.59 * Math.exp(-0.91 * lai);
  return (1.1 * nir - savi * (0.1 + nir)) / (1.1 + savi);
}

function pixel(albedo: number, lst: number, lai: number): PixelInputs {
  const nir = 0.4;
  return {
    red: redOf(lai, nir),
    nir,
    albedo,
    lst,
    elevation: ELEVATION,
    slopeEast: 0,
    slopeNorth: 0,
    sunEast: 0.5,
    sunNorth: 0,
    sunUp: Math.cos(Math.PI / 6),
    sinLatitude: 0.6,
    cosLatitude: 0.8,
    extraterrestrialDay: 40.9e6 / 86400,
    airTemperatureDatum: 298 + LAPSE * ELEVATION,
    vapourPressure: 1.5,
    wind200: (3 * Math.log(200 / 0.03)) / Math.log(2 / 0.03),
    stationElevation: ELEVATION,
    referenceInst: 0.8,
    referenceDay: 8,
    transmissivityDay: 0.73,
  };
}
const hot = pixel(0.26, 322, 0.1);
const cold = pixel(0.2, 298, 4);
const middle = pixel(0.22, 308, 1.5);
const line = calibrateLine('metric', [cold], [hot], { ...parameters, coldFraction: 1.05, hotFraction: 0 });

const relative = (got: number, want: number) => Math.abs(got / want - 1);
const agrees = (got: number, want: number, what: string) => expect(relative(got, want), what).toBeLessThan(1e-5);

describe('the worked METRIC chain (regression)', () => {
  it.each([
    { name: 'hot', inputs: hot, rn: 389.9159, g: 120.68294, emissivity: 0.951, roughness: 0.005 },
    { name: 'cold', inputs: cold, rn: 593.7625, g: 42.98702, emissivity: 0.98, roughness: 0.072 },
    { name: 'middle', inputs: middle, rn: 516.978729, g: 68.442506, emissivity: 0.965, roughness: 0.027 },
  ])('$name: pressure, transmissivity, shortwave, wind, Rn and G', ({ inputs, rn, g, emissivity, roughness }) => {
    const surface = metric.surface(inputs, parameters);
    agrees(surface.pressureKPa, 87.89664, 'P');
    agrees(surface.tau, 0.76428, 'tau');
    agrees(surface.shortwave, 876.284716, 'Rs');
    agrees(surface.wind200, 6.289638, 'u200');
    agrees(surface.emissivity, emissivity, 'emissivity');
    agrees(surface.roughness, roughness, 'z0m');
    agrees(surface.netRadiation, rn, 'Rn');
    agrees(surface.soilHeat, g, 'G');
  });

  it('anchors: H, LE, dT and rah', () => {
    const [c, h] = line.anchors;
    agrees(c.latentHeat, 569.8826, 'cold LE');
    expect(h.latentHeat).toBe(0);
    agrees(c.sensibleHeat, -19.107124, 'cold H');
    agrees(h.sensibleHeat, 269.232965, 'hot H');
    agrees(c.temperatureDifference, -0.435017, 'cold dT');
    agrees(h.temperatureDifference, 4.592651, 'hot dT');
    agrees(c.aerodynamicResistance, 23.225449, 'cold rah');
    agrees(h.aerodynamicResistance, 16.361416, 'hot rah');
  });

  it.each([
    { name: 'hot', inputs: hot, dT: 4.592651, friction: 0.338789, length: -11.090393, density: 0.955327 },
    { name: 'cold', inputs: cold, dT: -0.435017, friction: 0.322142, length: 132.23949, density: 1.01606 },
    { name: 'middle', inputs: middle, dT: 1.659844, friction: 0.374418, length: -42.841355, density: Number.NaN },
  ])('$name: u*, Obukhov length and air density', ({ inputs, dT, friction, length, density }) => {
    const { wind200, roughness, pressureKPa } = metric.surface(inputs, parameters);
    const air = heatTransfer(dT, inputs.lst, wind200, roughness);
    agrees(air.frictionVelocity, friction, 'u*');
    agrees(air.obukhovLength, length, 'L');
    if (density) agrees(airDensity(pressureKPa, inputs.lst - dT), density, 'rho');
  });

  it('the line dT = a + b T: a -62.861895 K, b 0.209486167', () => {
    agrees(line.slope, 0.209486167, 'b');
    agrees(-line.slope * line.zeroTemperature, -62.861895, 'a');
  });

  it('a pixel between: H, LE, evaporative fraction, reference fraction, ET of the day', () => {
    const found = computePixel(metric, middle, line, parameters);
    agrees(line.slope * (middle.lst - line.zeroTemperature), 1.659844, 'dT');
    agrees(found.sensibleHeat, 93.240559, 'H');
    agrees(found.latentHeat, 355.295663, 'LE');
    agrees(found.evaporativeFraction, 0.792123, 'EF');
    agrees((3600 * found.latentHeat) / vaporisationHeat(middle.lst), 0.528811, 'ET, mm/h');
    agrees(found.dayFraction, 0.661014, 'reference fraction');
    agrees(found.dayFraction * middle.referenceDay, 5.288113, 'ET, mm/d');
  });

  it('SEBAL carries the same evaporative fraction to 5.354671 mm/d: Rn24 = (1 - a) Ra tau - 110 tau', () => {
    const found = computePixel(metric, middle, line, parameters);
    const surface = metric.surface(middle, parameters);
    const fraction = sebal.dayFraction(middle, surface, found.latentHeat, parameters);
    agrees(fraction * middle.referenceDay, 5.354671, 'ET, mm/d');
  });
});

describe('the energy balance', () => {
  it.each([metric, sebal])('of $name closes to 1e-6 W m-2 (conservation of energy)', (method) => {
    for (let lst = 290; lst <= 330; lst += 0.7) {
      for (const lai of [0.05, 0.8, 3.5]) {
        const found = computePixel(method, pixel(0.21, lst, lai), line, parameters);
        const { netRadiation, soilHeat, sensibleHeat, latentHeat } = found;
        expect(Math.abs(netRadiation - soilHeat - sensibleHeat - latentHeat)).toBeLessThan(1e-6);
      }
    }
  });
});

describe('latent heat of vaporisation', () => {
  it('is 2.45 MJ/kg at 20 degrees Celsius (FAO-56 annex 3, printed to two digits) and 2.501 at 0', () => {
    expect(vaporisationHeat(293.15) / 1e6).toBeCloseTo(2.45, 2);
    expect(vaporisationHeat(273.15)).toBe(2.501e6);
  });
});

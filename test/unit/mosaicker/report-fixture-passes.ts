import type { PassReport } from '../../../services/mosaicker/report/model.ts';
import type { AnchorRecord } from '../../../shared/contract/calibration.ts';

function anchor(role: 'hot' | 'cold', ndvi: number, kelvin: number): AnchorRecord {
  return {
    role,
    row: role === 'hot' ? 1204 : 877,
    column: role === 'hot' ? 655 : 1310,
    red: 0.09,
    nir: 0.31,
    ndvi,
    albedo: role === 'hot' ? 0.243 : 0.205,
    lst: kelvin + 0.6,
    datumTemperature: kelvin,
    elevationM: role === 'hot' ? 412 : 365,
    slopeEast: 0.004,
    slopeNorth: -0.002,
    longitudeDeg: 10.2513,
    latitudeDeg: 45.6127,
    lai: role === 'hot' ? 0.08 : 4.2,
    netRadiation: role === 'hot' ? 431.2 : 612.9,
    soilHeat: role === 'hot' ? 104.7 : 48.1,
    sensibleHeat: role === 'hot' ? 301.6 : -18.4,
    latentHeat: role === 'hot' ? 24.9 : 583.2,
    temperatureDifference: role === 'hot' ? 6.41 : -0.32,
    aerodynamicResistance: role === 'hot' ? 24.3 : 18.9,
    reason:
      role === 'hot'
        ? 'agricultural, slope 0.3°, NDVI below the 10th percentile (0.21), temperature above the 80th (313.4 K), neighbourhood even'
        : 'agricultural, slope 0.2°, NDVI above the 95th percentile (0.81), temperature below the 20th (297.1 K), neighbourhood even',
  };
}

/** Passes with invented anchors; the third has borrowed its calibration. */
export function passes(dates: readonly string[]): PassReport[] {
  return dates.map((date, i) => {
    const columns = 40;
    const rows = 30;
    const counts = Array.from({ length: columns * rows }, (_, cell) => {
      const ndvi = (cell % columns) / columns;
      const warm = Math.floor(cell / columns) / rows;
      const density =
        Math.exp(-(((warm - 0.85 + 0.75 * ndvi) / 0.14) ** 2)) * (0.4 + Math.exp(-(((ndvi - 0.2) / 0.15) ** 2)));
      return density > 0.02 ? Math.round(4000 * density) : 0;
    });
    const passId = `${date}-landsat${i % 2 === 0 ? 8 : 9}-p033`;
    return {
      passId,
      satellite: i % 2 === 0 ? 'Landsat 8' : 'Landsat 9',
      date,
      acquired: `${date}T17:21:0${i}Z`,
      scenes: [
        `LC0${8 + (i % 2)}_L2SP_033033_${date.replaceAll('-', '')}_02_T1`,
        `LC0${8 + (i % 2)}_L2SP_033034_${date.replaceAll('-', '')}_02_T1`,
      ],
      anchors: i === 2 ? [] : [anchor('cold', 0.83, 296.2 + i), anchor('hot', 0.17, 315.8 + i)],
      slope: 0.3436,
      zeroTemperature: 297.13,
      ...(i === 2 ? { borrowedFrom: '2025-05-18-landsat9-p033' } : {}),
      hotCandidates: i === 2 ? 7 : 412,
      coldCandidates: 655,
      adjustment: { passId, gain: 1, offset: [0.0277, -0.053, 0.0252, 0][i], links: i === 3 ? 0 : 2 },
      scatter: {
        ndviStart: 0,
        ndviStep: 0.025,
        temperatureStartK: 292,
        temperatureStepK: 1,
        columns,
        rows,
        counts,
      },
    };
  });
}

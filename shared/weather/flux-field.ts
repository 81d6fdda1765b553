import type { Plan } from '../contract/plan.ts';
import type { PassRecord } from '../contract/scene.ts';
import type { StationDay } from '../contract/weather.ts';
import type { PassParameters } from '../flux/methods/method.ts';
import { extraterrestrialDaily } from '../flux/sun/fao-geometry.ts';
import { sunPosition, sunVector } from '../flux/sun/sun-position.ts';
import { projection } from '../region/crs.ts';
import { pixelToLonLat, pixelToMap } from '../region/pixel-place.ts';
import { dayOfYear, isoDate, parseInstant } from '../time/calendar.ts';
import { DAY_VARIABLES, dayField, OVERPASS_VARIABLES, overpassField } from './field.ts';

/** Smooth planes of the flux kernel that follow from place and time alone, in the order of `evaluate`. */
const SUN_VARIABLES = ['sunEast', 'sunNorth', 'sunUp', 'sinLatitude', 'cosLatitude', 'extraterrestrialDay'] as const;
const VARIABLES = [...SUN_VARIABLES, ...OVERPASS_VARIABLES, ...DAY_VARIABLES] as const;

export interface FluxField {
  readonly variables: typeof VARIABLES;
  /** Fills one value for each variable at a global pixel coordinate. */
  readonly evaluate: (row: number, column: number, out: Float64Array) => void;
}

const RADIANS = Math.PI / 180;

/** Sun and weather of one pass as a field that is continuous over the whole grid. */
export function fluxField(plan: Plan, passIndex: number): FluxField {
  const { pass, weather } = plan.passes[passIndex];
  const { lapseRateKPerM } = plan.basin.method;
  const project = projection(plan.grid.crs);
  const overpass = overpassField(
    weather.overpass.map((entry) => {
      const [x, y] = project.forward(entry.station.longitudeDeg, entry.station.latitudeDeg);
      return { x, y, weather: entry };
    }),
    lapseRateKPerM,
  );
  const day = dayField(placedDays(plan, weather.day));
  const time = overpassTime(pass);
  const doy = dayOfYear(pass.date);
  const fromOverpass = new Float64Array(OVERPASS_VARIABLES.length);
  const fromDay = new Float64Array(DAY_VARIABLES.length);
  return {
    variables: VARIABLES,
    evaluate(row, column, out) {
      const [longitude, latitude] = pixelToLonLat(plan.grid, row, column);
      const phi = latitude * RADIANS;
      const sun = sunVector(phi, longitude * RADIANS, time(latitude));
      const [x, y] = pixelToMap(plan.grid, row, column);
      overpass.evaluate(x, y, fromOverpass);
      day.evaluate(x, y, fromDay);
      out[0] = sun.east;
      out[1] = sun.north;
      out[2] = sun.up;
      out[3] = Math.sin(phi);
      out[4] = Math.cos(phi);
      // MJ m-2 d-1 to W m-2.
      out[5] = (extraterrestrialDaily(phi, doy) * 1e6) / 86400;
      out.set(fromOverpass, SUN_VARIABLES.length);
      out.set(fromDay, SUN_VARIABLES.length + OVERPASS_VARIABLES.length);
    },
  };
}

/** Daily reference ET (tall, mm/d) of a date, at global pixel coordinates. */
export function referenceDayField(plan: Plan, date: string): FluxField['evaluate'] {
  const field = dayField(
    placedDays(
      plan,
      plan.days.filter((entry) => entry.date === date),
    ),
  );
  const values = new Float64Array(field.variables.length);
  return (row, column, out) => {
    const [x, y] = pixelToMap(plan.grid, row, column);
    field.evaluate(x, y, values);
    out[0] = values[0];
  };
}

/**
 * Cumulative daily reference ET at the days where the interpolation between overpasses bends. For boundary day t:
 * C(t) = sum of ETr over the days before t, D(t) = sum of (day - from) * ETr, counted from the first day.
 * Variables: all C, then all D, then the total of the period (from..to, both included).
 */
export function cumulativeReferenceField(
  plan: Plan,
  boundaryDays: ArrayLike<number>,
  from: number,
  to: number,
): FluxField['evaluate'] {
  const bends = Array.from(boundaryDays);
  const last = Math.max(to + 1, ...bends);
  const byDate = Map.groupBy(plan.days, (entry) => entry.date);
  const fields: { offset: number; evaluate: (x: number, y: number, out: Float64Array) => void }[] = [];
  for (let day = from; day < last; day++) {
    const entries = byDate.get(isoDate(day));
    if (!entries) continue;
    fields.push({ offset: day - from, evaluate: dayField(placedDays(plan, entries)).evaluate });
  }
  const scratch = new Float64Array(2);
  return (row, column, out) => {
    const [x, y] = pixelToMap(plan.grid, row, column);
    let c = 0;
    let d = 0;
    let next = 0;
    let total = 0;
    const record = (day: number) => {
      for (let k = 0; k < bends.length; k++) {
        if (bends[k] !== day) continue;
        out[k] = c;
        out[bends.length + k] = d;
      }
    };
    for (let day = from; day <= last; day++) {
      record(day);
      if (next < fields.length && fields[next].offset === day - from) {
        fields[next++].evaluate(x, y, scratch);
        c += scratch[0];
        d += (day - from) * scratch[0];
        if (day <= to) total = c;
      }
    }
    out[2 * bends.length] = total;
  };
}

/** What holds for a whole pass, whatever its calibration. */
export function passParameters(plan: Plan, passIndex: number): PassParameters {
  const { pass } = plan.passes[passIndex];
  const { method } = plan.basin;
  const { declination, distanceAu } = sunPosition(0, 0, parseInstant(pass.acquired));
  return {
    datumElevation: plan.datumElevationM,
    lapse: method.lapseRateKPerM,
    turbidity: method.turbidity,
    longwaveTemperature: method.longwaveTemperature,
    inverseSquaredDistance: 1 / distanceAu ** 2,
    declination,
    terrain: plan.terrain !== undefined,
  };
}

function placedDays(plan: Plan, days: readonly StationDay[]) {
  const project = projection(plan.grid.crs);
  return days.map((day) => {
    const [x, y] = project.forward(day.station.longitudeDeg, day.station.latitudeDeg);
    return { x, y, day };
  });
}

/**
 * Time of the overpass as a linear function of latitude through the scenes' centre times: the satellite takes some
 * 24 s for a row, and a step at the row border would be a seam.
 */
function overpassTime(pass: PassRecord): (latitudeDeg: number) => number {
  const mean = parseInstant(pass.acquired);
  const points = pass.scenes.map((scene) => ({
    t: parseInstant(scene.acquired),
    y: centreLatitude(scene.georeference),
  }));
  const n = points.length;
  const t0 = points.reduce((sum, p) => sum + p.t, 0) / n;
  const y0 = points.reduce((sum, p) => sum + p.y, 0) / n;
  const spread = points.reduce((sum, p) => sum + (p.y - y0) ** 2, 0);
  if (n < 2 || spread < 1e-6) return () => mean;
  const rate = points.reduce((sum, p) => sum + (p.y - y0) * (p.t - t0), 0) / spread;
  return (latitude) => t0 + rate * (latitude - y0);
}

function centreLatitude(georeference: PassRecord['scenes'][number]['georeference']): number {
  const x = georeference.originX + (georeference.width / 2) * georeference.pixelWidth;
  const y = georeference.originY - (georeference.height / 2) * georeference.pixelHeight;
  return projection(georeference).inverse(x, y)[1];
}

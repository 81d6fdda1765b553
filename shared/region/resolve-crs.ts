import { BasinloomError } from '../contract/errors.ts';
import type { CrsSpec } from '../contract/grid.ts';
import { checkFitness, datumShiftKnown } from './crs-fitness.ts';
import { type Boundary, extentOf } from './geometry.ts';

/**
 * The reference system of a grid: Lambert azimuthal equal-area centred on the boundary's bounding box (rounded to 0.1
 * degree), or the projected system of an EPSG code.
 *
 * @param crs "equal-area", "EPSG:3035" or 3035
 * @throws BasinloomError CRS_UNKNOWN for codes that are not known or cannot be computed at the boundary;
 *   CRS_NOT_METRIC for geographic systems, feet, Web Mercator, and systems whose areas are wrong at the boundary
 */
export async function resolveCrs(crs: string | number, boundary: Boundary): Promise<CrsSpec> {
  if (crs === 'equal-area') return equalAreaCrs(boundary);
  const code = /^(?:EPSG:)?(\d+)$/i.exec(String(crs))?.[1];
  if (code === undefined) throw new BasinloomError('CRS_UNKNOWN', { crs });
  const found = await epsgCrs(Number(code));
  checkFitness(found, boundary);
  return found;
}

function equalAreaCrs(boundary: Boundary): CrsSpec {
  const { west, south, east, north } = extentOf(boundary);
  const latitude = tenth((south + north) / 2);
  const middle = (west + east) / 2;
  const longitude = tenth(middle > 180 ? middle - 360 : middle);
  return {
    code: `laea:${latitude},${longitude}`,
    proj4: `+proj=laea +lat_0=${latitude} +lon_0=${longitude} +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs`,
    kind: 'laea',
    latitudeOfOriginDeg: latitude,
    longitudeOfOriginDeg: longitude,
  };
}

/** Adding 0 turns -0 into 0. */
const tenth = (degrees: number) => Math.round(degrees * 10) / 10 + 0;

/** A projected system in metres by its EPSG code. @throws BasinloomError CRS_UNKNOWN, CRS_NOT_METRIC */
export async function epsgCrs(code: number): Promise<CrsSpec> {
  const crs = `EPSG:${code}`;
  const entry = await epsgEntry(code);
  if (!entry) throw new BasinloomError('CRS_UNKNOWN', { crs });
  const { kind, proj4 } = entry;
  const webMercator = /\+proj=merc\b.*\+nadgrids=@null/.test(proj4);
  if (kind !== 'CRS-PROJCRS' || !/\+units=m(\s|$)/.test(proj4) || webMercator) {
    throw new BasinloomError('CRS_NOT_METRIC', { crs });
  }
  if (/\+axis=/.test(proj4)) {
    throw new BasinloomError('CRS_UNKNOWN', { crs: `${crs} (its axes do not point east and north)` });
  }
  if (!datumShiftKnown(proj4)) {
    throw new BasinloomError('CRS_UNKNOWN', { crs: `${crs} (the shift from WGS 84 to its datum is not known)` });
  }
  return { code: crs, proj4, kind: 'epsg', epsg: code };
}

/** proj4 text of an EPSG code, projected or not, or null when it is not known. */
export async function epsgDefinition(code: number): Promise<string | null> {
  return (await epsgEntry(code))?.proj4 ?? null;
}

interface EpsgEntry {
  readonly kind: string;
  readonly proj4: string;
}

async function epsgEntry(code: number): Promise<EpsgEntry | null> {
  // The codes of nearly every scene need no look-up.
  const utm = /^32([67])(0[1-9]|[1-5]\d|60)$/.exec(String(code));
  if (utm) {
    const south = utm[1] === '7' ? ' +south' : '';
    return { kind: 'CRS-PROJCRS', proj4: `+proj=utm +zone=${Number(utm[2])}${south} +datum=WGS84 +units=m +no_defs` };
  }
  if (code === 4326) return { kind: 'CRS-GEOGCRS', proj4: '+proj=longlat +datum=WGS84 +no_defs' };
  if (!Number.isSafeInteger(code)) return null;
  try {
    // One small file for each code: the index as a whole is 8 MB.
    const module = (await import(`epsg-index/s/${code}.json`, { with: { type: 'json' } })) as {
      default: { kind: string; proj4?: string | null };
    };
    const { kind, proj4 } = module.default;
    return proj4 ? { kind, proj4: proj4.replace(' +type=crs', '') } : null;
  } catch {
    return null;
  }
}

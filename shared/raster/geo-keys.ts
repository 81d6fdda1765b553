import { datumShiftKnown } from '../region/crs-fitness.ts';
import { epsgDefinition } from '../region/resolve-crs.ts';
import { DEGREE, METRE, PROJ_METHOD, USER_DEFINED } from './tiff-tags.ts';

/** GeoKeys by their name in the GeoTIFF standard (OGC 19-008r4). */
export type GeoKeys = Readonly<Record<string, number | string | readonly number[] | undefined>>;

type Found = { readonly proj4: string } | { readonly reason: string };

/**
 * proj4 text of a file's GeoKeys, or the reason why there is none. Known are EPSG codes, and user-defined Lambert
 * azimuthal equal-area, Albers and transverse Mercator in metres.
 */
export async function proj4OfGeoKeys(keys: GeoKeys): Promise<Found> {
  const model = keys.GTModelTypeGeoKey;
  const projected = Number(keys.ProjectedCSTypeGeoKey);
  const geographic = Number(keys.GeographicTypeGeoKey);
  if (model === 1 && projected && projected !== USER_DEFINED) return ofCode(projected);
  if (model === 2 && geographic && geographic !== USER_DEFINED) return ofCode(geographic);
  if (model === 1) return ofParameters(keys);
  return { reason: model === undefined ? 'it has no GeoKeys' : `model type ${String(model)} without an EPSG code` };
}

async function ofCode(code: number): Promise<Found> {
  const proj4 = await epsgDefinition(code);
  if (!proj4) return { reason: `EPSG:${code} is not known` };
  if (!datumShiftKnown(proj4)) return { reason: `the shift from WGS 84 to the datum of EPSG:${code} is not known` };
  return { proj4 };
}

async function ofParameters(keys: GeoKeys): Promise<Found> {
  const units = keys.ProjLinearUnitsGeoKey ?? METRE;
  if (units !== METRE) return { reason: `linear unit ${String(units)} is not the metre` };
  const angles = keys.GeogAngularUnitsGeoKey ?? DEGREE;
  if (angles !== DEGREE) return { reason: `angular unit ${String(angles)} is not the degree` };
  const method = methodOf(keys);
  if ('reason' in method) return method;
  const datum = await datumOf(keys);
  return 'reason' in datum ? datum : { proj4: `${method.proj4} ${datum.proj4} +units=m +no_defs` };
}

/** Projection and its parameters, without datum and unit. */
function methodOf(keys: GeoKeys): Found {
  const number = (...names: string[]) =>
    Number(names.map((name) => keys[name]).find((value) => value !== undefined) ?? 0);
  const latitude = number('ProjCenterLatGeoKey', 'ProjNatOriginLatGeoKey', 'ProjFalseOriginLatGeoKey');
  const longitude = number('ProjCenterLongGeoKey', 'ProjNatOriginLongGeoKey', 'ProjFalseOriginLongGeoKey');
  const east = number('ProjFalseEastingGeoKey', 'ProjFalseOriginEastingGeoKey');
  const north = number('ProjFalseNorthingGeoKey', 'ProjFalseOriginNorthingGeoKey');
  const place = `+lat_0=${latitude} +lon_0=${longitude} +x_0=${east} +y_0=${north}`;
  switch (Number(keys.ProjCoordTransGeoKey)) {
    case PROJ_METHOD.lambertAzimuthalEqualArea:
      return { proj4: `+proj=laea ${place}` };
    case PROJ_METHOD.albersEqualArea: {
      const parallels = `+lat_1=${number('ProjStdParallel1GeoKey')} +lat_2=${number('ProjStdParallel2GeoKey')}`;
      return { proj4: `+proj=aea ${place} ${parallels}` };
    }
    case PROJ_METHOD.transverseMercator:
      return { proj4: `+proj=tmerc ${place} +k=${String(keys.ProjScaleAtNatOriginGeoKey ?? 1)}` };
    default:
      return { reason: `projection method ${String(keys.ProjCoordTransGeoKey)} is not known` };
  }
}

/** Datum codes of EPSG that some files give in place of a geographic system. */
const SYSTEM_OF_DATUM: Readonly<Record<number, number>> = { 6326: 4326, 6269: 4269, 6258: 4258 };

async function datumOf(keys: GeoKeys): Promise<Found> {
  const given = Number(keys.GeographicTypeGeoKey);
  const code = given && given !== USER_DEFINED ? given : SYSTEM_OF_DATUM[Number(keys.GeogGeodeticDatumGeoKey)];
  if (!code) return { reason: 'its datum is not known' };
  const found = await ofCode(code);
  return 'reason' in found ? found : { proj4: found.proj4.replace('+proj=longlat ', '').replace(' +no_defs', '') };
}

import type { CrsSpec } from '../contract/grid.ts';
import { DEGREE, GEO_KEY, METRE, PROJ_METHOD, TAG, USER_DEFINED, WGS84 } from './tiff-tags.ts';

const PROJECTED = 1;
const PIXEL_IS_AREA = 1;

export interface GeoKeyValues {
  readonly directory: number[];
  readonly doubles: number[];
  readonly ascii: string;
}

/** GeoKeys (OGC 19-008r4) of a grid's reference system: an EPSG code, or Lambert azimuthal equal-area on WGS 84. */
export function geoKeyDirectory(crs: CrsSpec): GeoKeyValues {
  const writer = new KeyWriter();
  writer.short(GEO_KEY.modelType, PROJECTED);
  writer.short(GEO_KEY.rasterType, PIXEL_IS_AREA);
  if (crs.kind === 'epsg') {
    writer.text(GEO_KEY.citation, crs.code);
    writer.short(GEO_KEY.projectedCrs, crs.epsg as number);
    writer.short(GEO_KEY.projLinearUnits, METRE);
    return writer.values();
  }
  writer.text(
    GEO_KEY.citation,
    `Lambert azimuthal equal-area at ${crs.latitudeOfOriginDeg}, ${crs.longitudeOfOriginDeg}`,
  );
  writer.short(GEO_KEY.geographicType, WGS84);
  writer.text(GEO_KEY.geogCitation, 'WGS 84');
  writer.short(GEO_KEY.geogAngularUnits, DEGREE);
  writer.short(GEO_KEY.projectedCrs, USER_DEFINED);
  writer.short(GEO_KEY.projection, USER_DEFINED);
  writer.short(GEO_KEY.projMethod, PROJ_METHOD.lambertAzimuthalEqualArea);
  writer.short(GEO_KEY.projLinearUnits, METRE);
  writer.double(GEO_KEY.projFalseEasting, 0);
  writer.double(GEO_KEY.projFalseNorthing, 0);
  writer.double(GEO_KEY.projCenterLong, crs.longitudeOfOriginDeg as number);
  writer.double(GEO_KEY.projCenterLat, crs.latitudeOfOriginDeg as number);
  return writer.values();
}

/** Keys must come in ascending order. */
class KeyWriter {
  readonly #keys: number[] = [];
  readonly #doubles: number[] = [];
  #ascii = '';

  short(key: number, value: number): void {
    this.#keys.push(key, 0, 1, value);
  }

  double(key: number, value: number): void {
    this.#keys.push(key, TAG.geoDoubleParams, 1, this.#doubles.length);
    this.#doubles.push(value);
  }

  text(key: number, value: string): void {
    this.#keys.push(key, TAG.geoAsciiParams, value.length + 1, this.#ascii.length);
    this.#ascii += `${value}|`;
  }

  values(): GeoKeyValues {
    return { directory: [1, 1, 0, this.#keys.length / 4, ...this.#keys], doubles: this.#doubles, ascii: this.#ascii };
  }
}

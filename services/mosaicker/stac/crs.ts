import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { CrsSpec } from '../../../shared/contract/grid.ts';

const id = (code: number) => ({ authority: 'EPSG', code });

const parameter = (name: string, value: number, unit: string, code: number) => ({ name, value, unit, id: id(code) });

/**
 * PROJJSON (schema v0.5 of proj.org) of the equal-area system of a region: Lambert azimuthal equal-area (EPSG
 * operation method 9820) on the WGS 84 datum, centred on the region, in metres.
 */
export function laeaProjJson(latitudeOfOriginDeg: number, longitudeOfOriginDeg: number): object {
  return {
    $schema: 'https://proj.org/schemas/v0.5/projjson.schema.json',
    type: 'ProjectedCRS',
    name: `WGS 84 / Lambert azimuthal equal-area (${latitudeOfOriginDeg}, ${longitudeOfOriginDeg})`,
    base_crs: {
      name: 'WGS 84',
      datum: {
        type: 'GeodeticReferenceFrame',
        name: 'World Geodetic System 1984',
        ellipsoid: { name: 'WGS 84', semi_major_axis: 6378137, inverse_flattening: 298.257223563 },
        id: id(6326),
      },
      coordinate_system: {
        subtype: 'ellipsoidal',
        axis: [
          { name: 'Geodetic latitude', abbreviation: 'Lat', direction: 'north', unit: 'degree' },
          { name: 'Geodetic longitude', abbreviation: 'Lon', direction: 'east', unit: 'degree' },
        ],
      },
      id: id(4326),
    },
    conversion: {
      name: 'Equal-area, centred on the region',
      method: { name: 'Lambert Azimuthal Equal Area', id: id(9820) },
      parameters: [
        parameter('Latitude of natural origin', latitudeOfOriginDeg, 'degree', 8801),
        parameter('Longitude of natural origin', longitudeOfOriginDeg, 'degree', 8802),
        parameter('False easting', 0, 'metre', 8806),
        parameter('False northing', 0, 'metre', 8807),
      ],
    },
    coordinate_system: {
      subtype: 'Cartesian',
      axis: [
        { name: 'Easting', abbreviation: 'E', direction: 'east', unit: 'metre' },
        { name: 'Northing', abbreviation: 'N', direction: 'north', unit: 'metre' },
      ],
    },
  };
}

/** The same system as well-known text 2 (ISO 19162:2019), for readers that do not know PROJJSON. */
export function laeaWkt2(latitudeOfOriginDeg: number, longitudeOfOriginDeg: number): string {
  const degree = 'ANGLEUNIT["degree",0.0174532925199433]';
  const metre = 'LENGTHUNIT["metre",1]';
  return [
    `PROJCRS["WGS 84 / Lambert azimuthal equal-area (${latitudeOfOriginDeg}, ${longitudeOfOriginDeg})"`,
    `BASEGEOGCRS["WGS 84",DATUM["World Geodetic System 1984",ELLIPSOID["WGS 84",6378137,298.257223563,${metre}]],` +
      `PRIMEM["Greenwich",0,${degree}],ID["EPSG",4326]]`,
    'CONVERSION["Equal-area, centred on the region",METHOD["Lambert Azimuthal Equal Area",ID["EPSG",9820]]',
    `PARAMETER["Latitude of natural origin",${latitudeOfOriginDeg},${degree},ID["EPSG",8801]]`,
    `PARAMETER["Longitude of natural origin",${longitudeOfOriginDeg},${degree},ID["EPSG",8802]]`,
    `PARAMETER["False easting",0,${metre},ID["EPSG",8806]]`,
    `PARAMETER["False northing",0,${metre},ID["EPSG",8807]]]`,
    'CS[Cartesian,2]',
    `AXIS["easting (E)",east,ORDER[1],${metre}]`,
    `AXIS["northing (N)",north,ORDER[2],${metre}]]`,
  ].join(',');
}

/**
 * How the projection extension of STAC (v2.0.0) names a coordinate system: by its code where a register has one;
 * otherwise `proj:code` is null and the system is written out.
 */
export function projectionFields(crs: CrsSpec): Record<string, unknown> {
  if (crs.kind === 'epsg') return { 'proj:code': `EPSG:${crs.epsg}` };
  const { latitudeOfOriginDeg, longitudeOfOriginDeg } = crs;
  if (latitudeOfOriginDeg === undefined || longitudeOfOriginDeg === undefined) {
    throw new BasinloomError('INTERNAL', { detail: `equal-area system ${crs.code} has no centre` });
  }
  return {
    'proj:code': null,
    'proj:wkt2': laeaWkt2(latitudeOfOriginDeg, longitudeOfOriginDeg),
    'proj:projjson': laeaProjJson(latitudeOfOriginDeg, longitudeOfOriginDeg),
  };
}

/**
 * The world's own flat map: metres east and north of a centre on the border of two UTM zones. Everything in the
 * world is a function of this place. The map is only a way to write functions down; areas are taken on the ellipsoid.
 */
export const CENTRE_LONGITUDE = 12;
export const CENTRE_LATITUDE = 41;
const METRES_PER_DEGREE_LATITUDE = 111_053;
const METRES_PER_DEGREE_LONGITUDE = 84_122;

export function toPlane(longitude: number, latitude: number): [x: number, y: number] {
  return [
    (longitude - CENTRE_LONGITUDE) * METRES_PER_DEGREE_LONGITUDE,
    (latitude - CENTRE_LATITUDE) * METRES_PER_DEGREE_LATITUDE,
  ];
}

export function toDegrees(x: number, y: number): [longitude: number, latitude: number] {
  return [CENTRE_LONGITUDE + x / METRES_PER_DEGREE_LONGITUDE, CENTRE_LATITUDE + y / METRES_PER_DEGREE_LATITUDE];
}

/** WGS 84. */
const SEMI_MAJOR = 6_378_137;
const FLATTENING = 1 / 298.257223563;
const E2 = FLATTENING * (2 - FLATTENING);

/** Area on the ellipsoid of one square metre of the map at a latitude, m2 (M N cos phi per square radian). */
export function trueAreaFactor(latitude: number): number {
  const phi = (latitude * Math.PI) / 180;
  const w2 = 1 - E2 * Math.sin(phi) ** 2;
  const meridian = (SEMI_MAJOR * (1 - E2)) / w2 ** 1.5;
  const normal = SEMI_MAJOR / Math.sqrt(w2);
  const perDegree2 = meridian * normal * Math.cos(phi) * (Math.PI / 180) ** 2;
  return perDegree2 / (METRES_PER_DEGREE_LATITUDE * METRES_PER_DEGREE_LONGITUDE);
}

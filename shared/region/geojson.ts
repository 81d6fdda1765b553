import type { ErrorCode } from '../contract/error-table.ts';
import { BasinloomError, type ErrorParameters } from '../contract/errors.ts';
import { isRecord } from '../contract/is-record.ts';
import { type Polygon, type Position, type Ring, signedArea } from './geometry.ts';
import { findCrossing } from './ring-crossing.ts';

/** A feature as found, its geometry not yet looked at. */
export interface FoundFeature {
  readonly geometry: unknown;
  readonly properties: Record<string, unknown> | null;
  /** For messages: "feature 3". */
  readonly place: string;
}

/** Reads the polygons of a GeoJSON text (RFC 7946) and says where one is wrong. */
export class GeoJsonReader {
  readonly #file: string;
  readonly #code: ErrorCode;

  /** @param code error code of whatever is wrong, crossings aside */
  constructor(file: string, code: ErrorCode) {
    this.#file = file;
    this.#code = code;
  }

  error(place: string, detail: string, code = this.#code, more: ErrorParameters = {}): BasinloomError {
    return new BasinloomError(code, { file: this.#file, place, detail, ...more });
  }

  /** The features of a text; a bare geometry counts as one. */
  features(text: string): FoundFeature[] {
    let root: unknown;
    try {
      root = JSON.parse(text);
    } catch (cause) {
      throw this.error('the whole file', `not valid JSON: ${(cause as Error).message}`);
    }
    if (!isRecord(root)) throw this.error('the whole file', 'not a GeoJSON object');
    this.#checkCrs(root, 'the whole file');
    if (root.type === 'FeatureCollection') {
      if (!Array.isArray(root.features)) throw this.error('the whole file', '"features" is not a list');
      return root.features.map((feature, index) => this.#feature(feature, `feature ${index + 1}`));
    }
    if (root.type === 'Feature') return [this.#feature(root, 'the feature')];
    return [{ geometry: root, properties: null, place: 'the geometry' }];
  }

  /** The polygons of a geometry, checked and put in order. */
  polygons(geometry: unknown, place: string): Polygon[] {
    if (!isRecord(geometry)) throw this.error(place, 'it has no geometry');
    this.#checkCrs(geometry, place);
    switch (geometry.type) {
      case 'Polygon':
        return [this.#polygon(geometry.coordinates, place)];
      case 'MultiPolygon': {
        const parts = geometry.coordinates;
        if (!Array.isArray(parts)) throw this.error(place, '"coordinates" is not a list');
        return parts.map((part, index) => this.#polygon(part, `${place}, part ${index + 1}`));
      }
      case 'GeometryCollection': {
        const parts = geometry.geometries;
        if (!Array.isArray(parts)) throw this.error(place, '"geometries" is not a list');
        return parts.flatMap((part, index) => this.polygons(part, `${place}, geometry ${index + 1}`));
      }
      default:
        throw this.error(place, `"${String(geometry.type)}" is not a Polygon or MultiPolygon`);
    }
  }

  /** Collapsed rings are tolerated as long as something is left. */
  checkArea(polygons: readonly Polygon[], place: string): void {
    const area = polygons.flat().reduce((sum, ring) => sum + signedArea(ring), 0);
    if (!(area > 0)) throw this.error(place, 'it encloses no area');
  }

  #feature(feature: unknown, place: string): FoundFeature {
    if (!isRecord(feature) || feature.type !== 'Feature') throw this.error(place, 'it is not a Feature');
    this.#checkCrs(feature, place);
    return { geometry: feature.geometry, properties: isRecord(feature.properties) ? feature.properties : null, place };
  }

  /** RFC 7946 knows WGS 84 only; files of the older standard may say so (CRS84), or say something else. */
  #checkCrs(object: Record<string, unknown>, place: string): void {
    if (object.crs === undefined || object.crs === null) return;
    const properties = isRecord(object.crs) && isRecord(object.crs.properties) ? object.crs.properties : {};
    if (/(^|:)CRS84$/.test(String(properties.name))) return;
    const found = properties.name === undefined ? '' : `"${String(properties.name)}": `;
    throw this.error(`${place}, member "crs"`, `${found}coordinates must be WGS 84 longitude, latitude (CRS84)`);
  }

  #polygon(rings: unknown, place: string): Polygon {
    if (!Array.isArray(rings) || rings.length === 0) throw this.error(place, 'the polygon has no ring');
    const read = rings.map((ring, index) => this.#ring(ring, `${place}, ${ringName(index)}`));
    const crossing = findCrossing(read);
    if (crossing) {
      const [longitude, latitude] = crossing.at.map((value) => Number(value.toFixed(6)));
      const where = `${place}, ${ringName(crossing.ring)}`;
      throw this.error(where, '', 'BOUNDARY_CROSSES_ITSELF', { longitude, latitude });
    }
    return read.map((ring, index) => (signedArea(ring) >= 0 === (index === 0) ? ring : ring.toReversed()));
  }

  #ring(ring: unknown, place: string): Ring {
    if (!Array.isArray(ring) || ring.length < 4) throw this.error(place, 'a ring has at least 4 positions');
    const positions = ring.map((position, index) => this.#position(position, place, index));
    const [first, last] = [positions[0], positions[positions.length - 1]];
    if (!same(first, last)) throw this.error(place, 'the ring is not closed: its last position is not the first');
    return positions.filter((position, index) => index === 0 || !same(position, positions[index - 1]));
  }

  #position(position: unknown, ring: string, index: number): Position {
    const place = () => `${ring}, position ${index + 1}`;
    if (!Array.isArray(position) || !Number.isFinite(position[0]) || !Number.isFinite(position[1])) {
      throw this.error(place(), 'a position is two numbers: longitude, latitude');
    }
    const [longitude, latitude] = position as number[];
    if (Math.abs(longitude) > 180 || Math.abs(latitude) > 90) {
      throw this.error(place(), `${longitude}, ${latitude} ${outOfRange(longitude, latitude)}`);
    }
    return [longitude, latitude];
  }
}

/** No longitude comes near this; metres and feet of a projected system soon pass it. */
const SURELY_PROJECTED = 1000;

function outOfRange(longitude: number, latitude: number): string {
  if (Math.abs(longitude) > SURELY_PROJECTED || Math.abs(latitude) > SURELY_PROJECTED) {
    return 'looks projected, not longitude/latitude: convert the file to WGS 84';
  }
  if (Math.abs(longitude) <= 90 && Math.abs(latitude) <= 180) {
    return 'is not longitude, latitude in degrees; is the order latitude, longitude?';
  }
  return 'is not longitude, latitude in degrees';
}

const ringName = (index: number) => (index === 0 ? 'outer ring' : `hole ${index}`);

const same = (a: Position, b: Position) => a[0] === b[0] && a[1] === b[1];

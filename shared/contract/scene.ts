/** Scenes and passes as the survey records them (metadata only). */

export type BandRole =
  | 'blue'
  | 'green'
  | 'red'
  | 'nir'
  | 'swir1'
  | 'swir2'
  | 'surface-temperature'
  | 'qa-pixel'
  | 'qa-radsat';

/** Bands of surface reflectance. */
export type ReflectanceRole = Extract<BandRole, 'blue' | 'green' | 'red' | 'nir' | 'swir1' | 'swir2'>;

export type AlbedoModel = 'tm' | 'oli';

/** Where a raster lies: affine without rotation, and its coordinate system as proj4 text. */
export interface RasterGeoreference {
  readonly width: number;
  readonly height: number;
  /** Upper-left corner of the upper-left pixel, in the raster's own system. */
  readonly originX: number;
  readonly originY: number;
  readonly pixelWidth: number;
  /** Positive: rows go down. */
  readonly pixelHeight: number;
  readonly proj4: string;
}

export interface BandFile {
  /** Absolute path or URL. */
  readonly file: string;
  /** value = DN * scale + offset; flags have scale 1, offset 0. */
  readonly scale: number;
  readonly offset: number;
  /** DN that means "no data". */
  readonly fill: number;
  /** Identity of the bytes: size, time of change and a hash of samples. */
  readonly fingerprint: string;
}

export interface SceneRecord {
  /** Product identifier from the metadata. */
  readonly id: string;
  readonly source: 'landsat-level-2';
  /** For example "LANDSAT_8". */
  readonly satellite: string;
  readonly albedoModel: AlbedoModel;
  readonly path: number;
  readonly row: number;
  /** Centre time, ISO 8601 UTC. */
  readonly acquired: string;
  readonly sunElevationDeg: number;
  readonly sunAzimuthDeg: number;
  readonly earthSunDistanceAu: number;
  /** Of the whole scene, percent, as delivered; may be absent. */
  readonly cloudCoverPct?: number;
  readonly metadataFile: string;
  /** One grid for all bands of the scene. */
  readonly georeference: RasterGeoreference;
  readonly bands: Readonly<Record<BandRole, BandFile>>;
  readonly fingerprint: string;
}

/** All scenes of one satellite and path in one overpass; they share one calibration. */
export interface PassRecord {
  /** "<date>-<satellite>-p<path>", for example "2025-06-12-landsat8-p033"; safe as a file name. */
  readonly id: string;
  readonly satellite: string;
  readonly path: number;
  /** Local (solar) calendar date, YYYY-MM-DD. */
  readonly date: string;
  /** Mean of the scenes' centre times, ISO 8601 UTC. */
  readonly acquired: string;
  /** In row order, north to south (ascending WRS row). */
  readonly scenes: readonly SceneRecord[];
}

/** Shapes of the grid as they travel in plans and artefacts. Geometry on them lives in shared/region. */

/** A coordinate reference system: what proj4 needs, and what a GeoTIFF must say. */
export interface CrsSpec {
  /** "EPSG:32631", or for the automatic equal-area system "laea:<lat_0>,<lon_0>" in degrees. */
  readonly code: string;
  /** Definition string for proj4. */
  readonly proj4: string;
  readonly kind: 'epsg' | 'laea';
  /** EPSG number when kind is "epsg". */
  readonly epsg?: number;
  /** Centre of the equal-area system, degrees, when kind is "laea". */
  readonly latitudeOfOriginDeg?: number;
  readonly longitudeOfOriginDeg?: number;
}

/**
 * The one snapped grid of a region. Pixel (row 0, column 0) has its upper-left corner at (originX, originY);
 * x grows with the column, y falls with the row. Origins are whole multiples of the resolution.
 */
export interface GridSpec {
  readonly crs: CrsSpec;
  /** m, multiple of resolution. */
  readonly originX: number;
  /** m, multiple of resolution. */
  readonly originY: number;
  /** m per pixel, square. */
  readonly resolution: number;
  readonly rows: number;
  readonly columns: number;
  /** Tile edge in pixels: 128, 256, 512 or 1024. */
  readonly tileSize: number;
}

export interface TileAddress {
  readonly tileRow: number;
  readonly tileColumn: number;
}

/** A rectangle of global pixels; may reach outside the grid (halo). */
export interface PixelWindow {
  readonly row: number;
  readonly column: number;
  readonly rows: number;
  readonly columns: number;
}

/** TIFF 6.0, GeoTIFF 1.1 and GDAL tags that are read or written here. */
export const TAG = {
  newSubfileType: 254,
  imageWidth: 256,
  imageLength: 257,
  bitsPerSample: 258,
  compression: 259,
  photometric: 262,
  stripOffsets: 273,
  samplesPerPixel: 277,
  rowsPerStrip: 278,
  stripByteCounts: 279,
  planarConfiguration: 284,
  predictor: 317,
  tileWidth: 322,
  tileLength: 323,
  tileOffsets: 324,
  tileByteCounts: 325,
  sampleFormat: 339,
  modelPixelScale: 33550,
  modelTiepoint: 33922,
  modelTransformation: 34264,
  geoKeyDirectory: 34735,
  geoDoubleParams: 34736,
  geoAsciiParams: 34737,
  gdalMetadata: 42112,
  gdalNodata: 42113,
} as const;

export const COMPRESSION = {
  none: 1,
  lzw: 5,
  deflate: 8,
  packBits: 32773,
  oldDeflate: 32946,
  zstd: 50000,
} as const;

/** Type numbers of tag values: TIFF 6.0 section 2, and LONG8 of BigTIFF. */
export const FIELD = { ascii: 2, short: 3, long: 4, double: 12, long8: 16 } as const;

/** Keys that are written; those that are read go by their names. */
export const GEO_KEY = {
  modelType: 1024,
  rasterType: 1025,
  citation: 1026,
  geographicType: 2048,
  geogCitation: 2049,
  geogAngularUnits: 2054,
  projectedCrs: 3072,
  projection: 3074,
  projMethod: 3075,
  projLinearUnits: 3076,
  projFalseEasting: 3082,
  projFalseNorthing: 3083,
  projCenterLong: 3088,
  projCenterLat: 3089,
} as const;

export const USER_DEFINED = 32767;
/** EPSG codes of units, and of the geographic system WGS 84. */
export const METRE = 9001;
export const DEGREE = 9102;
export const WGS84 = 4326;

/** ProjMethodGeoKey: method codes of the GeoTIFF standard (annex of OGC 19-008r4). */
export const PROJ_METHOD = { transverseMercator: 1, lambertAzimuthalEqualArea: 10, albersEqualArea: 11 } as const;

import type { GridSpec } from '../../../shared/contract/grid.ts';
import type { RasterFile, RasterHeader, RasterSamples } from '../../../shared/raster/raster-file.ts';
import type { SampleType } from '../../../shared/raster/sample-type.ts';

/** A raster that lies in memory: 30 m pixels in UTM zone 33 north unless told otherwise. */
export function arrayRaster(
  samples: RasterSamples,
  width: number,
  changes: Partial<RasterHeader> & { place?: Partial<RasterHeader['georeference']> } = {},
): RasterFile & { readonly wanted: number[] } {
  const { place, ...header } = changes;
  const height = samples.length / width;
  const georeference = {
    width,
    height,
    originX: 495015,
    originY: 4586985,
    pixelWidth: 30,
    pixelHeight: 30,
    proj4: '+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs',
    ...place,
  };
  const wanted: number[] = [];
  return {
    header: {
      width,
      height,
      sampleType: samples.constructor.name.replace('Array', '').toLowerCase() as SampleType,
      nodata: null,
      scale: 1,
      offset: 0,
      georeference,
      blockWidth: width,
      blockHeight: height,
      compression: 1,
      predictor: 1,
      ...header,
    },
    wanted,
    async readWindow({ row, column, rows, columns }) {
      wanted.push(rows * columns);
      if (row < 0 || column < 0 || row + rows > height || column + columns > width) throw new RangeError('outside');
      const out = samples.slice(0, rows * columns);
      for (let r = 0; r < rows; r++) {
        const from = (row + r) * width + column;
        out.set(samples.subarray(from, from + columns) as never, r * columns);
      }
      return out;
    },
    async close() {},
  };
}

/** An equal-area grid that lies askew over `arrayRaster`: the meridian of its centre is turned against UTM's. */
export const laeaGrid: GridSpec = {
  crs: {
    code: 'laea:41.3,15.6',
    proj4: '+proj=laea +lat_0=41.3 +lon_0=15.6 +x_0=0 +y_0=0 +datum=WGS84 +units=m +no_defs',
    kind: 'laea',
    latitudeOfOriginDeg: 41.3,
    longitudeOfOriginDeg: 15.6,
  },
  originX: -48000,
  originY: 14400,
  resolution: 30,
  rows: 220,
  columns: 260,
  tileSize: 128,
};

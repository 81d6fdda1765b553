import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';
import { gdalJson, hasGdal } from '../support/gdal.ts';
import { temporaryFolder } from '../support/run-cli.ts';

/**
 * Writes a file of every sample type, compression and predictor, in four layouts, and beside each the samples of its
 * first band as GDAL reads them. Big-endian with predictor 3 is left out: GDAL 3.6 does not read back its own.
 */
const WRITE = `
import numpy, os
from osgeo import gdal_array
folder = sys.argv[1]
random = numpy.random.RandomState(7)
y, x = numpy.mgrid[0:75, 0:91]
wave = 90 + 60 * numpy.sin(x / 17.0) * numpy.cos(y / 23.0) + random.uniform(0, 20, (75, 91))
types = {'uint8': (1, 0), 'uint16': (300, 0), 'int16': (300, -30000), 'uint32': (2e7, 0), 'int32': (2e7, -2e9),
  'float32': (1.37, -100), 'float64': (1370, -1e5)}
layouts = {
  'strips': ['TILED=NO', 'BLOCKYSIZE=13'],
  'big-endian tiles': ['TILED=YES', 'BLOCKXSIZE=32', 'BLOCKYSIZE=16', 'ENDIANNESS=BIG'],
  'BigTIFF, 3 interleaved bands': ['TILED=YES', 'BLOCKXSIZE=32', 'BLOCKYSIZE=64', 'BIGTIFF=YES', 'INTERLEAVE=PIXEL'],
  'big-endian BigTIFF strips, 2 bands apart': ['BLOCKYSIZE=200', 'BIGTIFF=YES', 'INTERLEAVE=BAND', 'ENDIANNESS=BIG'],
}
srs = osr.SpatialReference(); srs.ImportFromEPSG(32633)
written = []
def write(name, samples, options, bands, kind=None):
  file = os.path.join(folder, str(len(written)) + '.tif')
  kind = kind or gdal_array.NumericTypeCodeToGDALTypeCode(samples.dtype.type)
  d = gdal.GetDriverByName('GTiff').Create(file, samples.shape[1], samples.shape[0], bands, kind, options)
  d.SetGeoTransform((400000, 30, 0, 4500000, 0, -30)); d.SetProjection(srs.ExportToWkt())
  d.GetRasterBand(1).WriteArray(samples)
  for band in range(2, bands + 1): d.GetRasterBand(band).WriteArray(numpy.roll(samples, 7 * band))
  d = None
  d = gdal.Open(file)
  d.GetRasterBand(1).ReadAsArray().tofile(file + '.raw')
  written.append({'name': name, 'file': file})
for kind, (factor, term) in types.items():
  samples = (wave * factor + term).astype(kind)
  if kind.startswith('float'): samples[5:9, 7:30] = numpy.nan
  for compression in ['NONE', 'PACKBITS', 'LZW', 'DEFLATE', 'ZSTD']:
    predictors = ['1'] if compression in ('NONE', 'PACKBITS') else ['1', '2', '3'] if kind.startswith('float') else ['1', '2']
    for predictor in predictors:
      for layout, options in layouts.items():
        if predictor == '3' and 'ENDIANNESS=BIG' in options: continue
        bands = 3 if '3 ' in layout else 2 if '2 ' in layout else 1
        extra = [] if compression in ('NONE', 'PACKBITS') else ['PREDICTOR=' + predictor]
        write(f'{kind} {compression} predictor {predictor}, {layout}', samples, options + ['COMPRESS=' + compression] + extra, bands)
signed = (wave - 128).astype('int8')
write('int8 LZW predictor 2', signed.view('uint8'), ['PIXELTYPE=SIGNEDBYTE', 'COMPRESS=LZW', 'PREDICTOR=2'], 1, gdal.GDT_Byte)
print(json.dumps(written))
`;

describe.skipIf(!hasGdal)('every format that GDAL writes is read bit for bit as GDAL reads it', () => {
  let remove: () => Promise<void>;
  let written: { name: string; file: string }[];
  beforeAll(async () => {
    const [folder, removeFolder] = await temporaryFolder();
    remove = removeFolder;
    written = gdalJson(WRITE, folder);
  });
  afterAll(() => remove());

  it('over all sample types, compressions, predictors and layouts', async () => {
    const wrong: string[] = [];
    for (const { name, file } of written) {
      const raster = await openRaster(await openFile(file));
      const { width, height } = raster.header;
      const samples = await raster.readWindow({ row: 0, column: 0, rows: height, columns: width });
      await raster.close();
      const ours = Buffer.from(samples.buffer, samples.byteOffset, samples.byteLength);
      if (!ours.equals(await readFile(`${file}.raw`))) wrong.push(name);
    }
    expect(written).toHaveLength(237);
    expect(wrong).toEqual([]);
  });

  it('and any window of them is the crop of the whole', async () => {
    for (const { file } of written.filter((_, k) => k % 7 === 0)) {
      const raster = await openRaster(await openFile(file));
      const whole = await raster.readWindow({ row: 0, column: 0, rows: 75, columns: 91 });
      for (const [row, column, rows, columns] of [
        [0, 90, 75, 1],
        [12, 31, 2, 3],
        [29, 5, 46, 80],
        [74, 0, 1, 91],
      ]) {
        const window = await raster.readWindow({ row, column, rows, columns });
        const crop = window.map(
          (_: number, i: number) => whole[(row + Math.floor(i / columns)) * 91 + column + (i % columns)],
        );
        expect(window).toEqual(crop);
      }
      await raster.close();
    }
  });
});

describe.skipIf(!hasGdal)('what GDAL says of a file, its reader finds', () => {
  let folder: string;
  let remove: () => Promise<void>;
  beforeAll(async () => {
    [folder, remove] = await temporaryFolder();
  });
  afterAll(() => remove());

  it('scale, offset and nodata of the first band, and the corner of a pixel-is-point file', async () => {
    const file = join(folder, 'said.tif');
    const transform = gdalJson<number[]>(
      `
d = gdal.GetDriverByName('GTiff').Create(sys.argv[1], 8, 6, 2, gdal.GDT_Float32)
srs = osr.SpatialReference(); srs.ImportFromEPSG(4326)
d.SetGeoTransform((15.25, 0.01, 0, 41.5, 0, -0.02)); d.SetProjection(srs.ExportToWkt())
d.SetMetadataItem('AREA_OR_POINT', 'Point')
d.GetRasterBand(2).SetScale(7); d.GetRasterBand(2).SetOffset(9)
d.GetRasterBand(1).SetScale(0.5); d.GetRasterBand(1).SetOffset(-3)
d.GetRasterBand(1).SetNoDataValue(-3.4028234663852886e+38)
d = None
d = gdal.Open(sys.argv[1])
print(json.dumps(d.GetGeoTransform()))
`,
      file,
    );
    const raster = await openRaster(await openFile(file));
    await raster.close();
    const { header } = raster;
    expect(header).toMatchObject({ scale: 0.5, offset: -3, nodata: Math.fround(-3.4028234663852886e38) });
    const { originX, originY, pixelWidth, pixelHeight } = header.georeference;
    for (const [ours, gdals] of [
      [originX, transform[0]],
      [pixelWidth, transform[1]],
      [originY, transform[3]],
      [-pixelHeight, transform[5]],
    ]) {
      expect(ours).toBeCloseTo(gdals, 10);
    }
  });

  it('blocks left out of a sparse file are nodata', async () => {
    const file = join(folder, 'sparse.tif');
    gdalJson(
      `
import numpy
d = gdal.GetDriverByName('GTiff').Create(sys.argv[1], 64, 64, 1, gdal.GDT_Int16, ['TILED=YES', 'BLOCKXSIZE=32', 'BLOCKYSIZE=32', 'SPARSE_OK=TRUE', 'COMPRESS=DEFLATE'])
srs = osr.SpatialReference(); srs.ImportFromEPSG(32633)
d.SetGeoTransform((0, 1, 0, 0, 0, -1)); d.SetProjection(srs.ExportToWkt())
d.GetRasterBand(1).SetNoDataValue(-7); d.GetRasterBand(1).WriteArray(numpy.full((32, 32), 5), 32, 0); d = None
print(1)
`,
      file,
    );
    const raster = await openRaster(await openFile(file));
    expect([...(await raster.readWindow({ row: 31, column: 30, rows: 2, columns: 4 }))]).toEqual([
      -7, -7, 5, 5, -7, -7, -7, -7,
    ]);
    await raster.close();
  });
});

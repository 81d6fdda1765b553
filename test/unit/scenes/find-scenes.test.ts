import { mkdir, rm, symlink, truncate, utimes, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { SceneRecord } from '../../../shared/contract/scene.ts';
import { findLandsatScenes } from '../../../shared/scenes/landsat-level-2/find-scenes.ts';
import {
  bandTiff,
  fixtureId,
  mtlJson,
  mtlText,
  mtlTree,
  mtlXml,
  temporaryFolders,
  writeScene,
} from './scene-fixture.ts';

const folder = temporaryFolders();

const scenesIn = async (root: string): Promise<SceneRecord[]> =>
  (await findLandsatScenes(root)).map((found) => {
    if ('problem' in found) throw found.problem;
    return found.scene;
  });

describe('reading a scene', () => {
  it('takes bands, scaling and grid of OLI/TIRS from metadata and headers', async () => {
    const root = await folder();
    await writeScene(root);
    const [scene] = await scenesIn(root);
    expect(scene).toMatchObject({
      id: 'LC08_L2SP_198030_20250612_20250620_02_T1',
      source: 'landsat-level-2',
      satellite: 'LANDSAT_8',
      albedoModel: 'oli',
      path: 198,
      row: 30,
      acquired: '2025-06-12T10:12:30.123Z',
      sunElevationDeg: 57.08727307,
      sunAzimuthDeg: 136.31696044,
      earthSunDistanceAu: 1.0155332,
      cloudCoverPct: 12.5,
    });
    expect(scene.georeference).toMatchObject({
      width: 48,
      height: 48,
      originX: 500010,
      originY: 4900020,
      pixelWidth: 30,
    });
    const { red, 'surface-temperature': thermal, 'qa-pixel': flags, 'qa-radsat': saturation } = scene.bands;
    expect(red).toMatchObject({ file: join(root, `${scene.id}_SR_B4.TIF`), scale: 2.75e-5, offset: -0.2, fill: 0 });
    expect(thermal).toMatchObject({
      file: join(root, `${scene.id}_ST_B10.TIF`),
      scale: 0.00341802,
      offset: 149,
      fill: 0,
    });
    expect(flags).toMatchObject({ scale: 1, offset: 0, fill: 1 });
    expect(saturation).toMatchObject({ scale: 1, offset: 0, fill: -1 });
  });

  it.each([
    ['ETM', 'LANDSAT_7'],
    ['TM', 'LANDSAT_5'],
  ] as const)('takes the bands of %s by their own numbers', async (sensor, satellite) => {
    const root = await folder();
    await writeScene(root, { sensor });
    const [scene] = await scenesIn(root);
    expect(scene).toMatchObject({ satellite, albedoModel: 'tm' });
    const names = Object.entries(scene.bands).map(([role, { file }]) => [
      role,
      file.slice(file.indexOf('_02_T1_') + 7),
    ]);
    expect(Object.fromEntries(names)).toEqual({
      blue: 'SR_B1.TIF',
      green: 'SR_B2.TIF',
      red: 'SR_B3.TIF',
      nir: 'SR_B4.TIF',
      swir1: 'SR_B5.TIF',
      swir2: 'SR_B7.TIF',
      'surface-temperature': 'ST_B6.TIF',
      'qa-pixel': 'QA_PIXEL.TIF',
      'qa-radsat': 'QA_RADSAT.TIF',
    });
  });

  it('leaves out a cloud cover that USGS could not find out (-1)', async () => {
    const root = await folder();
    const tree = mtlTree();
    tree.IMAGE_ATTRIBUTES.CLOUD_COVER = '-1';
    await writeScene(root, {}, tree);
    expect((await scenesIn(root))[0]).not.toHaveProperty('cloudCoverPct');
  });

  it('names the scene by all that decides its pixels, not by its place', async () => {
    const [here, there] = [await folder(), await folder()];
    for (const root of [here, there]) {
      await writeScene(root);
      for (const band of ['SR_B2', 'SR_B3', 'SR_B4', 'SR_B5', 'SR_B6', 'SR_B7', 'ST_B10', 'QA_PIXEL', 'QA_RADSAT']) {
        await utimes(join(root, `${fixtureId({})}_${band}.TIF`), 1000, 1000);
      }
    }
    const [first] = await scenesIn(here);
    expect((await scenesIn(there))[0].fingerprint).toBe(first.fingerprint);
    await writeFile(join(there, `${first.id}_SR_B4.TIF`), bandTiff('SR_B4', { dn: () => 9999 }));
    expect((await scenesIn(there))[0].fingerprint).not.toBe(first.fingerprint);
    const tree = mtlTree();
    tree.IMAGE_ATTRIBUTES.SUN_ELEVATION = '57.1';
    await writeFile(join(here, `${first.id}_MTL.txt`), mtlText(tree));
    expect((await scenesIn(here))[0].fingerprint).not.toBe(first.fingerprint);
  });
});

describe('finding scenes', () => {
  it('finds each scene once at any depth, whatever its forms of metadata, and follows no ring of links', async () => {
    const root = await folder();
    await writeScene(join(root, 'b', 'deep'), { row: 31 });
    await writeScene(join(root, 'a'), { row: 30 });
    const id = fixtureId({ row: 30 });
    await writeFile(join(root, 'a', `${id}_MTL.json`), mtlJson(mtlTree({ row: 30 })));
    await writeFile(join(root, 'a', `${id}_mtl.XML`), mtlXml(mtlTree({ row: 30 })));
    await symlink(root, join(root, 'b', 'ring'));
    await symlink(join(root, 'nowhere'), join(root, 'b', 'lost'));
    const scenes = await scenesIn(root);
    expect(scenes.map(({ row, metadataFile }) => [row, metadataFile])).toEqual([
      [30, join(root, 'a', `${id}_MTL.json`)],
      [31, join(root, 'b', 'deep', `${fixtureId({ row: 31 })}_MTL.txt`)],
    ]);
  });

  it('passes over a damaged form of the metadata for the next', async () => {
    const root = await folder();
    const file = await writeScene(root);
    await writeFile(file.replace('.txt', '.json'), '{"cut');
    expect((await scenesIn(root))[0].metadataFile).toBe(file);
  });

  it('gives no scenes for an empty folder, and an error for none', async () => {
    const root = await folder();
    expect(await findLandsatScenes(root)).toEqual([]);
    await expect(findLandsatScenes(join(root, 'none'))).rejects.toMatchObject({ code: 'SCENES_NONE' });
  });

  it('stops on request', async () => {
    const root = await folder();
    await writeScene(root);
    await expect(findLandsatScenes(root, AbortSignal.abort())).rejects.toThrow(/abort/i);
  });
});

describe('scenes that cannot be used', () => {
  const id = fixtureId({});
  const band = (root: string, name: string) => join(root, `${id}_${name}.TIF`);
  const tree = (change: (tree: ReturnType<typeof mtlTree>) => void) => {
    const changed = mtlTree();
    change(changed);
    return mtlText(changed);
  };
  const mtl = (root: string) => join(root, `${id}_MTL.txt`);

  const cases: readonly (readonly [string, string, (root: string) => Promise<void>, RegExp])[] = [
    ['a missing band', 'SCENE_BAND_MISSING', (root) => rm(band(root, 'SR_B5')), /SR_B5.TIF: .*role nir of scene LC08/],
    ['a missing flag band', 'SCENE_BAND_MISSING', (root) => rm(band(root, 'QA_RADSAT')), /role qa-radsat/],
    [
      'no thermal band (L2SR)',
      'SCENE_NO_THERMAL',
      (root) =>
        writeFile(
          mtl(root),
          tree((all) => delete all.LEVEL2_SURFACE_TEMPERATURE_PARAMETERS),
        ),
      /LEVEL2_SURFACE_TEMPERATURE_PARAMETERS\/TEMPERATURE_MULT_BAND_ST_B10/,
    ],
    [
      'a Level-1 scene',
      'SCENE_METADATA',
      (root) =>
        writeFile(
          mtl(root),
          tree((all) => (all.PRODUCT_CONTENTS.PROCESSING_LEVEL = 'L1TP')),
        ),
      /line \d+, PRODUCT_CONTENTS\/PROCESSING_LEVEL: "L1TP" is not a Level-2 product/,
    ],
    [
      'a band file elsewhere',
      'SCENE_METADATA',
      (root) =>
        writeFile(
          mtl(root),
          tree((all) => (all.PRODUCT_CONTENTS.FILE_NAME_BAND_5 = '../../secret.TIF')),
        ),
      /PRODUCT_CONTENTS\/FILE_NAME_BAND_5: "\.\.\/\.\.\/secret\.TIF" is not a plain file name/,
    ],
    [
      'an unknown sensor',
      'SCENE_METADATA',
      (root) =>
        writeFile(
          mtl(root),
          tree((all) => (all.IMAGE_ATTRIBUTES.SENSOR_ID = 'toString')),
        ),
      /IMAGE_ATTRIBUTES\/SENSOR_ID: sensor "toString" is not supported/,
    ],
    [
      'a date that does not exist',
      'SCENE_METADATA',
      (root) =>
        writeFile(
          mtl(root),
          tree((all) => (all.IMAGE_ATTRIBUTES.DATE_ACQUIRED = '2025-06-31')),
        ),
      /SCENE_CENTER_TIME: .*2025-06-31/,
    ],
    [
      'another size',
      'SCENE_GRID_MISMATCH',
      (root) => writeFile(band(root, 'ST_B10'), bandTiff('ST_B10', {}, { width: 24, height: 96 })),
      /ST_B10.TIF has 24 x 96 pixels instead of 48 x 48 pixels/,
    ],
    [
      'another place',
      'SCENE_GRID_MISMATCH',
      (root) => writeFile(band(root, 'SR_B4'), bandTiff('SR_B4', {}, { originX: 500040 })),
      /SR_B4.TIF has originX 500040 instead of 500010/,
    ],
    [
      'another projection',
      'SCENE_GRID_MISMATCH',
      (root) => writeFile(band(root, 'QA_PIXEL'), bandTiff('QA_PIXEL', {}, { epsg: 32633 })),
      /QA_PIXEL.TIF has the projection .* instead of/,
    ],
    ['a header cut off', 'RASTER_', (root) => truncate(band(root, 'SR_B3'), 4000), /SR_B3.TIF/],
    ['an empty band file', 'RASTER_', (root) => writeFile(band(root, 'SR_B3'), ''), /SR_B3.TIF/],
    ['a band file of text', 'RASTER_', (root) => writeFile(band(root, 'SR_B3'), '<html>gone</html>'), /SR_B3.TIF/],
  ];

  it.each(cases)('%s: %s, and the other scene stays', async (_, code, damage, message) => {
    const root = await folder();
    await writeScene(root);
    await writeScene(join(root, 'good'), { row: 31 });
    await damage(root);
    const found = await findLandsatScenes(root);
    expect(found).toHaveLength(2);
    const [broken, good] = found;
    expect(good).toMatchObject({ scene: { row: 31 } });
    if (!('problem' in broken)) throw new Error('the damage was not seen');
    expect(broken.id).toBe(id);
    expect(broken.problem.code).toMatch(code);
    expect(broken.problem.message).toMatch(message);
    expect(broken.problem.code).not.toBe('INTERNAL');
  });

  it('a folder in the place of a band', async () => {
    const root = await folder();
    await writeScene(root);
    await rm(band(root, 'SR_B5'));
    await mkdir(band(root, 'SR_B5'));
    expect(await findLandsatScenes(root)).toMatchObject([{ id, problem: { code: 'RASTER_READ' } }]);
  });
});

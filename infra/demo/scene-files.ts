import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { dateOf, instantOf } from './calendar.ts';
import { BANDS, type MtlForm, mtlText } from './mtl.ts';
import type { Overpass } from './overpass.ts';
import { type Pass, ROW_HOURS } from './passes.ts';
import { gridPoint, PIXEL } from './scene-grid.ts';
import type { SceneGround } from './scene-ground.ts';
import type { SceneImage } from './scene-image.ts';
import { sunAngles, sunAt } from './sun.ts';
import { writeTiff } from './tiff-writer.ts';

const FORMS: readonly MtlForm[] = ['json', 'txt', 'xml'];

/** Product identifier of one row of a pass. */
export function sceneId({ swath, day }: Pass, rowIndex: number): string {
  const three = (value: number) => String(value).padStart(3, '0');
  const plain = (date: string) => date.replaceAll('-', '');
  const sensor = swath.satellite === 'LANDSAT_8' ? 'LC08' : 'LE07';
  const place = `${three(swath.path)}${three(swath.rows[rowIndex])}`;
  return `${sensor}_L2SP_${place}_${plain(dateOf(day))}_${plain(dateOf(day + 8))}_02_T1`;
}

/** Writes a scene as its provider would: a folder with band files and metadata. The form of the metadata goes round. */
export async function writeScene(
  scenes: string,
  overpass: Overpass,
  rowIndex: number,
  { grid, inside }: SceneGround,
  image: SceneImage,
): Promise<void> {
  const { pass } = overpass;
  const { swath } = pass;
  const id = sceneId(pass, rowIndex);
  const folder = join(scenes, id);
  await mkdir(folder, { recursive: true });
  const { reflective, thermal } = BANDS[swath.sensor];
  const band = (name: string, samples: Uint16Array, nodata?: number) =>
    writeTiff(join(folder, `${id}_${name}.TIF`), {
      samples,
      width: grid.width,
      height: grid.height,
      epsg: grid.epsg,
      left: grid.left,
      top: grid.top,
      pixelWidth: PIXEL,
      pixelHeight: PIXEL,
      pixelIsPoint: true,
      ...(nodata !== undefined && { nodata }),
    });
  const hours = pass.hours + rowIndex * ROW_HOURS;
  const sun = sunAt(hours);
  const [longitude, latitude] = gridPoint(grid, grid.width / 2, grid.height / 2);
  const angles = sunAngles(sun, longitude, latitude);
  const form = FORMS[(pass.stream + rowIndex) % FORMS.length];
  const facts = {
    id,
    pass,
    row: swath.rows[rowIndex],
    acquired: instantOf(hours),
    sunElevation: angles.elevation,
    sunAzimuth: angles.azimuth,
    earthSunDistance: sun.distance,
    cloudCover: cloudCover(image, inside),
    utmZone: grid.utmZone,
    width: grid.width,
    height: grid.height,
    cornerX: grid.left + PIXEL / 2,
    cornerY: grid.top - PIXEL / 2,
  };
  await Promise.all([
    ...reflective.map((number, k) => band(`SR_B${number}`, image.reflectance[k], 0)),
    band(thermal, image.temperature, 0),
    band('QA_PIXEL', image.pixelQuality, 1),
    band('QA_RADSAT', image.saturation),
    writeFile(join(folder, `${id}_MTL.${form}`), mtlText(facts, form)),
  ]);
}

const CLOUD_BIT = 1 << 3;

/** Cloud over what the scene covers, percent. */
function cloudCover({ pixelQuality }: SceneImage, inside: Uint8Array): number {
  let [covered, cloudy] = [0, 0];
  for (let at = 0; at < inside.length; at++) {
    covered += inside[at];
    if (inside[at] && pixelQuality[at] & CLOUD_BIT) cloudy++;
  }
  return (100 * cloudy) / covered;
}

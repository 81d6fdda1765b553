import { XMLParser } from 'fast-xml-parser';
import { describe, expect, it } from 'vitest';
import { mtlText, type SceneFacts } from '../../../infra/demo/mtl.ts';
import { PASSES } from '../../../infra/demo/passes.ts';

const facts = (passIndex: number): SceneFacts => ({
  id: 'LX00_L2SP_000000_20250101_20250102_02_T1',
  pass: PASSES[passIndex],
  row: 32,
  acquired: '2025-06-14T09:52:17.250Z',
  sunElevation: 62.5,
  sunAzimuth: 131.25,
  earthSunDistance: 1.0157,
  cloudCover: 4.5,
  utmZone: 33,
  width: 100,
  height: 80,
  cornerX: 230010,
  cornerY: 4550010,
});

/** Pairs of a text form by group, read in the plainest way. */
function readOdl(text: string): Record<string, Record<string, string>> {
  const groups: Record<string, Record<string, string>> = {};
  let group = '';
  for (const line of text.split('\n')) {
    const [key, value = ''] = line.trim().split(' = ');
    if (key === 'GROUP') group = value;
    else if (key !== 'END_GROUP' && key !== 'END' && key) {
      groups[group] ??= {};
      groups[group][key] = value.replaceAll('"', '');
    }
  }
  return groups;
}

describe.each([0, 1])('the metadata of pass %i', (index) => {
  const json = JSON.parse(mtlText(facts(index), 'json')).LANDSAT_METADATA_FILE;

  it('say the same in all three forms', () => {
    expect(readOdl(mtlText(facts(index), 'txt'))).toEqual(json);
    const xml = new XMLParser({ parseTagValue: false }).parse(mtlText(facts(index), 'xml'));
    expect(xml.LANDSAT_METADATA_FILE).toEqual(json);
  });

  it('carry the scaling of Collection 2 Level-2 and name the bands of their sensor', () => {
    const tm = PASSES[index].swath.sensor === 'tm';
    const thermal = tm ? 'ST_B6' : 'ST_B10';
    expect(json.LEVEL2_SURFACE_TEMPERATURE_PARAMETERS[`TEMPERATURE_MULT_BAND_${thermal}`]).toBe('0.00341802');
    expect(json.LEVEL2_SURFACE_TEMPERATURE_PARAMETERS[`TEMPERATURE_ADD_BAND_${thermal}`]).toBe('149.0');
    const red = tm ? 3 : 4;
    expect(Number(json.LEVEL2_SURFACE_REFLECTANCE_PARAMETERS[`REFLECTANCE_MULT_BAND_${red}`])).toBe(2.75e-5);
    expect(json.PRODUCT_CONTENTS[`FILE_NAME_BAND_${red}`]).toMatch(new RegExp(`_SR_B${red}\\.TIF$`));
    expect(json.IMAGE_ATTRIBUTES.SCENE_CENTER_TIME).toBe('09:52:17.2500000Z');
  });
});

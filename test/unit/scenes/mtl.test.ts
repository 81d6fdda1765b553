import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readMtl } from '../../../shared/scenes/landsat-level-2/mtl.ts';
import { mtlJson, mtlText, mtlTree, mtlXml, temporaryFolders } from './scene-fixture.ts';

const folder = temporaryFolders();

async function mtlOf(name: string, content: string) {
  const file = join(await folder(), name);
  await writeFile(file, content);
  return readMtl(file);
}

const forms = [
  ['a_MTL.txt', mtlText],
  ['a_MTL.json', mtlJson],
  ['a_MTL.xml', mtlXml],
] as const;

describe.each(forms)('an MTL file %s', (name, write) => {
  it('gives text and numbers by group and key', async () => {
    const mtl = await mtlOf(name, write(mtlTree()));
    expect(mtl.text('IMAGE_ATTRIBUTES', 'SPACECRAFT_ID')).toBe('LANDSAT_8');
    expect(mtl.number('IMAGE_ATTRIBUTES', 'SUN_ELEVATION')).toBe(57.08727307);
    expect(mtl.number('LEVEL2_SURFACE_REFLECTANCE_PARAMETERS', 'REFLECTANCE_MULT_BAND_4')).toBe(2.75e-5);
    expect(mtl.number('LEVEL1_RADIOMETRIC_RESCALING', 'REFLECTANCE_MULT_BAND_4')).toBe(2e-5);
  });

  it('names file, group and key of what is missing or no number', async () => {
    const tree = mtlTree();
    tree.IMAGE_ATTRIBUTES.SUN_ELEVATION = 'high';
    const mtl = await mtlOf(name, write(tree));
    expect(() => mtl.number('IMAGE_ATTRIBUTES', 'SUN_ELEVATION')).toThrow(
      new RegExp(`${name}: (line \\d+, )?IMAGE_ATTRIBUTES/SUN_ELEVATION: "high" is not a number`),
    );
    expect(() => mtl.text('IMAGE_ATTRIBUTES', 'ROLL')).toThrow(/IMAGE_ATTRIBUTES\/ROLL: the key is missing/);
    expect(() => mtl.text('ORBIT', 'ROLL')).toThrow(/ORBIT\/ROLL: the group is missing/);
    expect(() => mtl.numberWithin('IMAGE_ATTRIBUTES', 'WRS_ROW', 1, 20)).toThrow(/WRS_ROW: 30 lies outside 1..20/);
  });
});

describe('damaged MTL files', () => {
  it.each([
    ['a_MTL.txt', mtlText(mtlTree()).slice(0, 700), /line \d+: the file ends inside group PRODUCT_CONTENTS/],
    ['a_MTL.txt', 'GROUP = LANDSAT_METADATA_FILE\nEND_GROUP = LANDSAT_METADATA_FILE\n', /ends without END/],
    ['a_MTL.txt', 'GROUP = A\n<html>\n', /line 2: "<html>" is not KEY = value/],
    ['a_MTL.txt', 'GROUP = A\nEND_GROUP = B\n', /line 2: END_GROUP = B closes another group/],
    ['a_MTL.txt', 'GROUP = A\nX = "y\n', /line 2: a quoted value is not closed/],
    ['a_MTL.txt', 'GROUP = A\nX = 1\nX = 2\n', /line 3: X is given twice with other values/],
    ['a_MTL.txt', 'X = 2\n', /line 1: X stands outside of any group/],
    ['a_MTL.txt', 'GROUP = L1_METADATA_FILE\nEND_GROUP = L1_METADATA_FILE\nEND\n', /not a Collection 2 MTL file/],
    ['a_MTL.txt', '', /the file ends without END/],
    ['a_MTL.json', mtlJson(mtlTree()).slice(0, 300), /file: not valid JSON/],
    ['a_MTL.json', '{"L1": {}}', /it has no group LANDSAT_METADATA_FILE/],
    ['a_MTL.json', '[]', /it has no group LANDSAT_METADATA_FILE/],
    ['a_MTL.json', '{"LANDSAT_METADATA_FILE": {"A": {"B": [1]}}}', /A\/B: it is not a single value/],
    ['a_MTL.xml', mtlXml(mtlTree()).slice(0, 300), /line \d+: not valid XML/],
    ['a_MTL.xml', '<a/>', /it has no group LANDSAT_METADATA_FILE/],
    ['a_MTL.pvl', '', /ends in none of/],
  ])('%s, case %#: the message says where and why', async (name, content, message) => {
    await expect(mtlOf(name, content)).rejects.toMatchObject({ code: 'SCENE_METADATA', message });
  });

  it('reads on to END only: padding behind it does not matter', async () => {
    const mtl = await mtlOf('a_MTL.TXT', `${mtlText(mtlTree()).replaceAll('\n', '\r\n')}${'\0'.repeat(100)}`);
    expect(mtl.text('IMAGE_ATTRIBUTES', 'SENSOR_ID')).toBe('OLI_TIRS');
  });

  it('says that a file cannot be read', async () => {
    await expect(readMtl(join(await folder(), 'b_MTL.txt'))).rejects.toMatchObject({
      code: 'SCENE_METADATA',
      message: expect.stringMatching(/b_MTL.txt: file: cannot be read/),
    });
  });
});

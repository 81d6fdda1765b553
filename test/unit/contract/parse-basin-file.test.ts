import { describe, expect, it } from 'vitest';
import { SMALLEST_BASIN_FILE } from '../../../infra/docs/basin-file-page.ts';
import { collectBasinFileProblems, parseBasinFile } from '../../../shared/contract/parse-basin-file.ts';

const text = SMALLEST_BASIN_FILE;
const problems = (yaml: string, set: Record<string, string> = {}) =>
  collectBasinFileProblems(yaml, 'basin.yaml', set).map(({ code, message }) => `${code} ${message}`);

describe('a valid basin file', () => {
  it('comes with every default, and dates stay text', () => {
    const basin = parseBasinFile(text, 'basin.yaml');
    expect(basin).toMatchObject({
      region: { name: 'Orrin', boundary: 'basin.geojson', zoneName: 'name' },
      grid: { crs: 'equal-area', resolution: 30, tile: 512 },
      period: { from: '2025-04-01', to: '2025-09-30', step: 'month' },
      method: { use: ['metric'], anchors: { minCandidates: 20, homogeneity: { maxNdviSd: 0.04 } } },
      checks: { seamLimit: 0.05 },
      engine: 'embedded',
    });
    expect(problems(text)).toEqual([]);
  });

  it('reads the core schema even where a directive asks for YAML 1.1', () => {
    expect(parseBasinFile(`%YAML 1.1\n---\n${text}`, 'basin.yaml').period.from).toBe('2025-04-01');
    expect(parseBasinFile(text.replace('Orrin', 'no'), 'basin.yaml').region.name).toBe('no');
  });

  it('takes overrides, read as YAML, into groups and lists', () => {
    const basin = parseBasinFile(text, 'basin.yaml', {
      'grid.tile': '128',
      'scenes.0.path': 'archive/',
      'scenes.1': '{ source: landsat-level-2, path: more/ }',
      products: '[et-day, et-period]',
      'method.anchors.onFailure': 'set-aside',
      'landcover.path': 'cover.tif',
      'landcover.classes': 'classes.csv',
      'period.to': '2025-08-31',
      'method.adjust.use': 'false',
    });
    expect(basin).toMatchObject({
      grid: { tile: 128 },
      scenes: [{ path: 'archive/' }, { path: 'more/' }],
      products: ['et-day', 'et-period'],
      method: { anchors: { onFailure: 'set-aside' }, adjust: { use: false } },
      landcover: { path: 'cover.tif', classes: 'classes.csv' },
      period: { to: '2025-08-31' },
    });
  });
});

describe('problems name file, line, key and remedy', () => {
  it.each([
    [`${text}gird: {}\n`, 'BASIN_FILE_KEY basin.yaml:13: unknown key "gird"; did you mean "grid"?'],
    [
      `${text}grid:\n  tile: 256\n  resoluton: 20\n`,
      'BASIN_FILE_KEY basin.yaml:15: unknown key "grid.resoluton"; did you mean "resolution"?',
    ],
    [
      `${text}resolution: 20\n`,
      'BASIN_FILE_KEY basin.yaml:13: unknown key "resolution"; did you mean "grid.resolution"?',
    ],
    [
      `${text}grid: { 12: 20 }\n`,
      'BASIN_FILE_KEY basin.yaml:13: unknown key "grid.12"; the keys here are crs, resolution, tile',
    ],
    [
      text.replace('boundary', 'boundry'),
      'BASIN_FILE_KEY basin.yaml:3: unknown key "region.boundry"; did you mean "boundary"?',
    ],
    [
      text.replace('    path: scenes/', '    paht: scenes/'),
      'BASIN_FILE_KEY basin.yaml:9: unknown key "scenes.0.paht"; did you mean "path"?',
    ],
    [
      `${text}grid:\n  tile: 100\n`,
      'BASIN_FILE_VALUE basin.yaml:14: grid.tile: 100 is not allowed; it must be one of 128, 256, 512, 1024',
    ],
    [
      `${text}grid: { resolution: "30" }\n`,
      'BASIN_FILE_VALUE basin.yaml:13: grid.resolution: "30" is not allowed; it must be a number above 0',
    ],
    [
      `${text}grid: { resolution: .nan }\n`,
      'BASIN_FILE_VALUE basin.yaml:13: grid.resolution: NaN is not allowed; it must be a number above 0',
    ],
    [
      `${text}grid: { crs: utm }\n`,
      'BASIN_FILE_VALUE basin.yaml:13: grid.crs: "utm" is not allowed; it must be "equal-area" or text like EPSG:3035 or a whole number above 0',
    ],
    [
      `${text}method: { anchors: { onFailure: borow } }\n`,
      'BASIN_FILE_VALUE basin.yaml:13: method.anchors.onFailure: "borow" is not allowed; it must be one of "borrow", "set-aside"; did you mean "borrow"?',
    ],
    [`${text}terrain:\n`, 'BASIN_FILE_VALUE basin.yaml:13: terrain: an empty value is not allowed; it must be text'],
    [text.replace('  name: Orrin\n', ''), 'BASIN_FILE_VALUE basin.yaml:1: region.name: is missing; it must be text'],
    [
      text.replace('2025-04-01', '2025-12-01'),
      'BASIN_FILE_VALUE basin.yaml:5: period.from: must not be after period.to',
    ],
    [
      text.replace('2025-09-30', '2025-09-31'),
      'BASIN_FILE_VALUE basin.yaml:6: period.to: 2025-09-31 is not a date of the calendar',
    ],
    [
      text.replace('2025-09-30', '30.9.2025'),
      'BASIN_FILE_VALUE basin.yaml:6: period.to: "30.9.2025" is not allowed; it must be a date YYYY-MM-DD',
    ],
    ['a:\n\tb: 1\n', 'BASIN_FILE_SYNTAX basin.yaml:2: not valid YAML: Tabs are not allowed as indentation'],
    [`${text}region: {}\n`, 'BASIN_FILE_SYNTAX basin.yaml:13: not valid YAML: Map keys must be unique'],
    [
      '- a\n',
      'BASIN_FILE_VALUE basin.yaml:1: basin file: a list is not a basin file; it must be a group of keys (region, period, ...)',
    ],
  ])('case %#', (yaml, expected) => {
    expect(problems(yaml)).toEqual([expected]);
  });

  it('says what an unresolved alias is', () => {
    expect(problems('a: *b\n')).toEqual([expect.stringMatching(/^BASIN_FILE_SYNTAX basin.yaml:1: .*alias/)]);
  });

  it('every problem has a remedy', () => {
    for (const problem of collectBasinFileProblems('a: 1', 'basin.yaml')) expect(problem.remedy).toMatch(/schema/);
  });

  it('lists all problems by line, and throws the first with the others in its cause', () => {
    const yaml = text.replace('Orrin', '7').replace('scenes/', '[]').concat('enigne: embedded\n');
    const found = problems(yaml, { 'grid.tile': '3' });
    expect(found.map((line) => line.split(':').slice(0, 3).join(':'))).toEqual([
      'BASIN_FILE_VALUE basin.yaml:2: region.name',
      'BASIN_FILE_VALUE basin.yaml:9: scenes.0.path',
      'BASIN_FILE_KEY basin.yaml:13: unknown key "enigne"; did you mean "engine"?',
      'BASIN_FILE_VALUE --set grid.tile:1: grid.tile',
    ]);
    try {
      parseBasinFile(yaml, 'basin.yaml', { 'grid.tile': '3' });
      expect.unreachable();
    } catch (error) {
      expect(error).toMatchObject({ code: 'BASIN_FILE_VALUE', parameters: { line: 2, more: 3 } });
      const { errors } = (error as Error).cause as AggregateError;
      expect(errors.map(({ code, message }) => `${code} ${message}`)).toEqual(found.slice(1));
    }
  });
});

describe('problems of overrides name the override', () => {
  it.each([
    [{ 'grid.tlie': '1' }, 'BASIN_FILE_KEY --set grid.tlie:1: unknown key "grid.tlie"; did you mean "tile"?'],
    [{ 'period.from': '2026-01-01' }, 'BASIN_FILE_VALUE --set period.from:1: period.from: must not be after period.to'],
    [
      { 'landcover.path': 'x' },
      'BASIN_FILE_VALUE --set landcover.path:1: landcover.classes: is missing; it must be text',
    ],
    [{ 'region.name.x': '1' }, 'BASIN_FILE_VALUE --set region.name.x:1: region.name.x: region.name has no part "x"'],
    [{ 'scenes.5.path': 'a' }, 'BASIN_FILE_VALUE --set scenes.5.path:1: scenes.5.path: scenes has no part "5"'],
    [{ 'scenes.x': 'a' }, 'BASIN_FILE_VALUE --set scenes.x:1: scenes.x: scenes has no part "x"'],
  ])('%o', (set, expected) => {
    expect(problems(text, set)).toEqual([expected]);
  });

  it('keeps a broken value and a dangerous key from harm', () => {
    expect(problems(text, { 'grid.tile': '[' })).toEqual([
      expect.stringMatching(/^BASIN_FILE_SYNTAX --set grid.tile:1: not valid YAML/),
    ]);
    expect(problems(text, { '__proto__.polluted': 'yes' })).toEqual([
      expect.stringMatching(/^BASIN_FILE_KEY --set __proto__.polluted:1: unknown key "__proto__"/),
    ]);
    expect(({} as Record<string, unknown>).polluted).toBeUndefined();
  });
});

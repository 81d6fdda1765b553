import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { SceneRecord } from '../../../shared/contract/scene.ts';
import { findSuperseded, groupPasses } from '../../../shared/scenes/passes.ts';

interface Given {
  readonly satellite?: string;
  readonly path?: number;
  readonly row: number;
  readonly acquired: string;
  readonly processed?: string;
  readonly tier?: string;
}

function scene({ satellite = 'LANDSAT_8', path = 33, row, acquired, processed = '20250620', tier = 'T1' }: Given) {
  const id = `LC08_L2SP_0330${row}_${acquired.slice(0, 10).replaceAll('-', '')}_${processed}_02_${tier}`;
  return { id, satellite, path, row, acquired, metadataFile: `${id}_MTL.txt` } as SceneRecord;
}

const NORTH = scene({ row: 31, acquired: '2025-06-12T17:30:00Z' });
const MIDDLE = scene({ row: 32, acquired: '2025-06-12T17:30:24Z' });
const SOUTH = scene({ row: 33, acquired: '2025-06-12T17:30:48Z' });

describe('groupPasses', () => {
  it('joins the rows of one overpass, north to south, at their mean time', () => {
    expect(groupPasses([SOUTH, NORTH, MIDDLE], -7)).toEqual([
      {
        id: '2025-06-12-landsat8-p033',
        satellite: 'LANDSAT_8',
        path: 33,
        date: '2025-06-12',
        acquired: '2025-06-12T17:30:24Z',
        scenes: [NORTH, MIDDLE, SOUTH],
      },
    ]);
  });

  it('keeps satellites, paths and dates apart', () => {
    const other = scene({ satellite: 'LANDSAT_9', row: 31, acquired: '2025-06-12T17:30:00Z' });
    const beside = scene({ path: 34, row: 31, acquired: '2025-06-19T17:36:00Z' });
    const later = scene({ row: 31, acquired: '2025-06-28T17:30:00Z' });
    expect(groupPasses([later, beside, other, NORTH], -7).map(({ id }) => id)).toEqual([
      '2025-06-12-landsat8-p033',
      '2025-06-12-landsat9-p033',
      '2025-06-19-landsat8-p034',
      '2025-06-28-landsat8-p033',
    ]);
  });

  it('joins rows whose neighbour between them is missing, and parts what is more than 10 minutes apart', () => {
    const far = scene({ row: 40, acquired: '2025-06-12T17:40:00Z' });
    const farther = scene({ row: 41, acquired: '2025-06-12T17:50:00.001Z' });
    expect(groupPasses([NORTH, far], -7)).toHaveLength(1);
    const [first, second] = groupPasses([NORTH, far, farther], -7);
    expect(first.scenes).toEqual([NORTH, far]);
    expect(second).toMatchObject({ id: '2025-06-12-landsat8-p033-2', scenes: [farther] });
  });

  it('dates a pass by the solar calendar of the region', () => {
    const evening = scene({ row: 31, acquired: '2025-06-11T23:40:00Z' });
    expect(groupPasses([evening], 10)[0].date).toBe('2025-06-12');
    expect(groupPasses([evening], 0)[0]).toMatchObject({ date: '2025-06-11', id: '2025-06-11-landsat8-p033' });
  });

  it('takes the newest processing of a scene, within one date the better tier, and reports the others', () => {
    const preliminary = scene({ row: 31, acquired: '2025-06-12T17:30:00.123Z', processed: '20250613', tier: 'RT' });
    const tier2 = scene({ row: 31, acquired: '2025-06-12T17:30:00Z', tier: 'T2' });
    const all = [tier2, preliminary, MIDDLE, NORTH];
    expect(groupPasses(all, -7)[0].scenes).toEqual([NORTH, MIDDLE]);
    expect(findSuperseded(all)).toEqual([
      { scene: tier2, by: NORTH },
      { scene: preliminary, by: NORTH },
    ]);
    expect(groupPasses([preliminary, MIDDLE], -7)[0].scenes).toEqual([preliminary, MIDDLE]);
    expect(findSuperseded([preliminary, MIDDLE])).toEqual([]);
  });

  it('takes one of two copies of a scene, always the same', () => {
    const copy = { ...NORTH, metadataFile: 'other/MTL.txt' };
    expect(groupPasses([NORTH, copy], -7)).toEqual(groupPasses([copy, NORTH], -7));
    expect(groupPasses([NORTH, copy], -7)[0].scenes).toHaveLength(1);
  });

  it('gives unique, safe ids and loses no scene, whatever the order', () => {
    const given = fc.record({
      satellite: fc.constantFrom('LANDSAT_5', 'LANDSAT_7', 'LANDSAT_8'),
      path: fc.integer({ min: 1, max: 3 }),
      row: fc.integer({ min: 1, max: 5 }),
      acquired: fc.integer({ min: 0, max: 400 }).map((m) => new Date(1.75e12 + m * 60_000 * 7).toISOString()),
      tier: fc.constantFrom('RT', 'T1', 'T2'),
    });
    fc.assert(
      fc.property(fc.array(given, { maxLength: 30 }), fc.nat(), (list, seed) => {
        const scenes = list.map(scene);
        const passes = groupPasses(scenes, 1);
        const turned = scenes.length
          ? [...scenes.slice(seed % scenes.length), ...scenes.slice(0, seed % scenes.length)]
          : [];
        expect(groupPasses(turned.reverse(), 1)).toEqual(passes);
        expect(new Set(passes.map(({ id }) => id)).size).toBe(passes.length);
        for (const { id } of passes) expect(id).toMatch(/^\d{4}-\d{2}-\d{2}-landsat\d-p\d{3}(-\d+)?$/);
        const kept = passes.flatMap((pass) => pass.scenes).length;
        expect(kept + findSuperseded(scenes).length).toBe(scenes.length);
      }),
      { seed: 1, numRuns: 200 },
    );
  });
});

import type { PassRecord, SceneRecord } from '../contract/scene.ts';
import { formatInstant, localSolarDate, parseInstant } from '../time/calendar.ts';
import { keepNewestProcessing, type SupersededScene } from './superseded.ts';

/** Longest time between the centres of neighbouring scenes of one overpass, s. WRS-2 rows follow every 24 s. */
const LONGEST_GAP_SECONDS = 600;

/**
 * Scenes of one satellite, one path and one overpass are one pass. Where a scene is there in several processings, the
 * newest is taken (see `findSuperseded`).
 *
 * @param solarOffsetHours hours that the region's solar time is ahead of UTC; decides the calendar date of a pass
 * @returns passes by time, then satellite and path; their ids differ from one another
 */
export function groupPasses(scenes: readonly SceneRecord[], solarOffsetHours: number): PassRecord[] {
  const passes = overpasses(scenes).map((overpass) => passOf(keepNewestProcessing(overpass).kept, solarOffsetHours));
  return withUniqueIds(passes.sort((a, b) => compare(a.acquired, b.acquired) || compare(a.id, b.id)));
}

/** Scenes that `groupPasses` leaves out, because another processing of the same image is newer. */
export function findSuperseded(scenes: readonly SceneRecord[]): SupersededScene[] {
  return overpasses(scenes).flatMap((overpass) => keepNewestProcessing(overpass).superseded);
}

/** Scenes by overpass, each in the order of time. */
function overpasses(scenes: readonly SceneRecord[]): SceneRecord[][] {
  const bySwath = Map.groupBy(scenes, ({ satellite, path }) => `${satellite} ${path}`);
  return [...bySwath.values()].flatMap((swath) => {
    const groups: SceneRecord[][] = [];
    let last = Number.NEGATIVE_INFINITY;
    for (const { scene, at } of inTime(swath)) {
      if (at - last > LONGEST_GAP_SECONDS) groups.push([]);
      groups.at(-1)!.push(scene);
      last = at;
    }
    return groups;
  });
}

function inTime(scenes: readonly SceneRecord[]): { scene: SceneRecord; at: number }[] {
  const timed = scenes.map((scene) => ({ scene, at: parseInstant(scene.acquired) }));
  return timed.sort((a, b) => a.at - b.at || compare(a.scene.id, b.scene.id));
}

/** @param scenes of one overpass, in row order, one for each row */
function passOf(scenes: readonly SceneRecord[], solarOffsetHours: number): PassRecord {
  const [{ satellite, path }] = scenes;
  const times = scenes.map(({ acquired }) => parseInstant(acquired));
  // Taken from the first time, so that the mean of equal times is that time.
  const mean = times[0] + times.reduce((sum, time) => sum + (time - times[0]), 0) / times.length;
  const date = localSolarDate(mean, solarOffsetHours);
  const id = `${date}-${satellite.toLowerCase().replaceAll(/[^a-z0-9]/g, '')}-p${String(path).padStart(3, '0')}`;
  return { id, satellite, path, date, acquired: formatInstant(mean), scenes };
}

/** Two overpasses of one path on one date (day and night) get "-2", "-3" behind the later ones. */
function withUniqueIds(passes: readonly PassRecord[]): PassRecord[] {
  const seen = new Map<string, number>();
  return passes.map((pass) => {
    const count = (seen.get(pass.id) ?? 0) + 1;
    seen.set(pass.id, count);
    return count === 1 ? pass : { ...pass, id: `${pass.id}-${count}` };
  });
}

function compare(a: string, b: string): number {
  return a === b ? 0 : a < b ? -1 : 1;
}

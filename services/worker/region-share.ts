import type { PixelWindow } from '../../shared/contract/grid.ts';
import type { PixelPolygons, Plan } from '../../shared/contract/plan.ts';
import { filled } from '../../shared/raster/sample-type.ts';
import { type EdgeIndex, indexEdges, polygonCoverage } from '../../shared/region/coverage.ts';

/** Edge indexes of the polygons of the current plan; the plan is one object for as long as a thread works on it. */
const indexes = new WeakMap<PixelPolygons, EdgeIndex>();

export function edgesOf(polygons: PixelPolygons): EdgeIndex {
  const known = indexes.get(polygons) ?? indexEdges(polygons);
  indexes.set(polygons, known);
  return known;
}

/** 1 for the pixels of a window that the region touches, whole or in part: all that the tables can ask for. */
export function insideRegion(plan: Plan, window: PixelWindow): Uint8Array {
  const { share } = polygonCoverage(edgesOf(plan.boundary), window);
  return filled(new Uint8Array(share.length), share, (value) => (value > 0 ? 1 : 0));
}

/** Vertices are snapped to 2^-16 pixel (half a millimetre at 30 m): sums of heights are then exact. */
const SNAP = 65536;

/** A pixel coordinate on the net of 2^-16 pixel. The same input snaps the same in every polygon. */
export function snap(coordinate: number): number {
  return Math.round(coordinate * SNAP) / SNAP;
}

/**
 * x of an edge at height y, ends given top first: the same bits for whoever asks, whichever way the edge runs, and
 * never outside the edge.
 */
export function edgeXAt(topX: number, topY: number, bottomX: number, bottomY: number, y: number): number {
  if (y <= topY) return topX;
  if (y >= bottomY) return bottomX;
  const x = topX + (y - topY) * ((bottomX - topX) / (bottomY - topY));
  return topX <= bottomX ? Math.min(bottomX, Math.max(topX, x)) : Math.max(bottomX, Math.min(topX, x));
}

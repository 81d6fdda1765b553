import type { PixelPolygons } from '../../shared/contract/plan.ts';

/** Which pixels of the grid one picture shows, and how large. */
export interface PictureFrame {
  /** Global grid coordinates of the picture's upper-left corner. */
  readonly row: number;
  readonly column: number;
  /** Grid pixels for each pixel of the picture. */
  readonly pixelsPerRow: number;
  readonly pixelsPerColumn: number;
}

/** Points closer than this to the one before are left out, pixels of the picture. */
const DETAIL = 0.6;

/** Rings in global pixel coordinates as SVG path data in pixels of the picture, one decimal. */
export function outlinePath(polygons: PixelPolygons, frame: PictureFrame): string {
  return polygons
    .flat()
    .map((ring) => ringPath(ring, frame))
    .join('');
}

function ringPath(ring: readonly (readonly [number, number])[], frame: PictureFrame): string {
  const commands: string[] = [];
  let lastX = Number.NaN;
  let lastY = Number.NaN;
  for (const [column, row] of ring) {
    const x = (column - frame.column) / frame.pixelsPerColumn;
    const y = (row - frame.row) / frame.pixelsPerRow;
    if (Math.abs(x - lastX) < DETAIL && Math.abs(y - lastY) < DETAIL) continue;
    commands.push(`${commands.length === 0 ? 'M' : 'L'}${oneDecimal(x)} ${oneDecimal(y)}`);
    lastX = x;
    lastY = y;
  }
  return commands.length > 2 ? `${commands.join('')}Z` : '';
}

function oneDecimal(value: number): string {
  const text = value.toFixed(1);
  return text === '-0.0' ? '0' : text.replace(/\.0$/, '');
}

/** The published tables: row types and their RFC 4180 text. */
export { adjustmentsCsv, overlapsCsv } from './tables/adjustments.ts';
export { type AnchorRow, anchorRows, anchorsCsv } from './tables/anchors.ts';
export { boundsCsv } from './tables/bounds.ts';
export { type SeamKind, type SeamRow, seamsCsv } from './tables/seams.ts';
export { type ZoneRow, zonesCsv } from './tables/zones.ts';

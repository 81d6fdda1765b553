/** The mergeable anchor summary of a tile: building, merging, encoding. */
export { comparePixels, pixelHash } from './pixel-hash.ts';
export { type SummaryPlanes, summariseTile } from './summarise-tile.ts';
export { decodeSummary, encodeSummary } from './summary-codec.ts';
export {
  addCandidate,
  CANDIDATES_PER_STRATUM,
  createSummary,
  mergeSummaries,
  type TileSummary,
} from './tile-summary.ts';

/**
 * The quality layers' bit tables. A set bit names something that was masked, filled, clipped or borrowed at
 * that pixel; nothing of the kind happens without one (design promise: no silent defaults).
 */
export interface QualityBit {
  readonly bit: number;
  readonly name: string;
  readonly meaning: string;
}

/** Quality of a day layer, and of prepared and flux tiles. uint16. Value 0: clear, nothing to say. */
export const DAY_QUALITY = {
  noScene: 1 << 0,
  fill: 1 << 1,
  cloud: 1 << 2,
  cloudShadow: 1 << 3,
  snow: 1 << 4,
  saturated: 1 << 5,
  water: 1 << 6,
  invalidInput: 1 << 7,
  shaded: 1 << 8,
  clippedLow: 1 << 9,
  clippedHigh: 1 << 10,
  borrowedCalibration: 1 << 11,
  adjusted: 1 << 12,
  unphysical: 1 << 13,
  noCalibration: 1 << 14,
} as const;

export const DAY_QUALITY_BITS: readonly QualityBit[] = [
  { bit: 0, name: 'no-scene', meaning: 'no scene of this date covers the pixel, or it lies outside the region' },
  { bit: 1, name: 'fill', meaning: 'the scene has fill (no data) here, sensor gaps included' },
  { bit: 2, name: 'cloud', meaning: 'cloud, dilated cloud or cirrus in the scene quality band' },
  { bit: 3, name: 'cloud-shadow', meaning: 'cloud shadow in the scene quality band' },
  { bit: 4, name: 'snow', meaning: 'snow or ice in the scene quality band' },
  { bit: 5, name: 'saturated', meaning: 'a band used is saturated, or terrain hides the pixel from the sensor' },
  { bit: 6, name: 'water', meaning: 'open water (information only; the value is kept)' },
  { bit: 7, name: 'invalid-input', meaning: 'reflectance or temperature outside its physical range' },
  { bit: 8, name: 'shaded', meaning: 'the slope gets no direct sun at the overpass' },
  { bit: 9, name: 'clipped-low', meaning: 'the fraction lay below its lower bound and was set to it' },
  { bit: 10, name: 'clipped-high', meaning: 'the fraction lay above its upper bound and was set to it' },
  { bit: 11, name: 'borrowed-calibration', meaning: 'the pass borrowed the calibration of another date' },
  { bit: 12, name: 'adjusted', meaning: 'the pass adjustment changed the value' },
  { bit: 13, name: 'unphysical', meaning: 'a flux lay outside its hard physical bounds; the value is nodata' },
  { bit: 14, name: 'no-calibration', meaning: 'the pass was set aside; the value is nodata' },
];

/** Bits of the day quality for which a pixel has no usable value. */
export const DAY_UNUSABLE =
  DAY_QUALITY.noScene |
  DAY_QUALITY.fill |
  DAY_QUALITY.cloud |
  DAY_QUALITY.cloudShadow |
  DAY_QUALITY.snow |
  DAY_QUALITY.saturated |
  DAY_QUALITY.invalidInput |
  DAY_QUALITY.shaded |
  DAY_QUALITY.unphysical |
  DAY_QUALITY.noCalibration;

/** Quality of a period layer. uint16. */
export const PERIOD_QUALITY = {
  noObservation: 1 << 0,
  gapTooLong: 1 << 1,
  heldAtStart: 1 << 2,
  heldAtEnd: 1 << 3,
  singleObservation: 1 << 4,
  borrowedCalibration: 1 << 5,
  adjusted: 1 << 6,
  clipped: 1 << 7,
  outsideRegion: 1 << 8,
} as const;

export const PERIOD_QUALITY_BITS: readonly QualityBit[] = [
  { bit: 0, name: 'no-observation', meaning: 'no usable overpass; nodata' },
  { bit: 1, name: 'gap-too-long', meaning: 'a gap between overpasses is longer than allowed; nodata' },
  { bit: 2, name: 'held-at-start', meaning: 'days before the first overpass use its fraction' },
  { bit: 3, name: 'held-at-end', meaning: 'days after the last overpass use its fraction' },
  { bit: 4, name: 'single-observation', meaning: 'the period rests on one overpass' },
  { bit: 5, name: 'borrowed-calibration', meaning: 'at least one overpass used a borrowed calibration' },
  { bit: 6, name: 'adjusted', meaning: 'at least one overpass was adjusted to its neighbours' },
  { bit: 7, name: 'clipped', meaning: 'at least one overpass value was clipped to a bound' },
  { bit: 8, name: 'outside-region', meaning: 'outside the region boundary; nodata' },
];

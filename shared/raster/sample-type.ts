export type SampleType = 'uint8' | 'int8' | 'int16' | 'uint16' | 'int32' | 'uint32' | 'float32' | 'float64';

export type RasterSamples =
  | Uint8Array
  | Int8Array
  | Int16Array
  | Uint16Array
  | Int32Array
  | Uint32Array
  | Float32Array
  | Float64Array;

const ARRAYS = {
  uint8: Uint8Array,
  int8: Int8Array,
  int16: Int16Array,
  uint16: Uint16Array,
  int32: Int32Array,
  uint32: Uint32Array,
  float32: Float32Array,
  float64: Float64Array,
} as const;

export function newSamples(type: SampleType, length: number): RasterSamples {
  return new ARRAYS[type](length);
}

/** The bytes as samples of this machine's byte order; copied when they do not lie on the type's boundary. */
export function viewSamples(type: SampleType, bytes: Uint8Array): RasterSamples {
  const size = bytesPerSample(type);
  // Not slice(): that of a Buffer gives a view, as badly placed as before.
  const aligned = bytes.byteOffset % size === 0 ? bytes : new Uint8Array(bytes);
  return new ARRAYS[type](aligned.buffer as ArrayBuffer, aligned.byteOffset, Math.floor(aligned.byteLength / size));
}

/** Fills `out` with `of` each value. The `from` of typed arrays does the same some twenty times slower. */
export function filled<T extends RasterSamples>(
  out: T,
  values: ArrayLike<number>,
  of: (value: number, index: number) => number,
): T {
  for (let i = 0; i < out.length; i++) out[i] = of(values[i], i);
  return out;
}

export function bytesPerSample(type: SampleType): number {
  return ARRAYS[type].BYTES_PER_ELEMENT;
}

/** Prefix of the type's name by SampleFormat of TIFF 6.0; 4, "undefined", is taken as GDAL takes it. 5, 6: complex. */
const PREFIXES: Readonly<Record<number, string>> = { 1: 'uint', 2: 'int', 3: 'float', 4: 'uint' };

/** Sample type of TIFF tags BitsPerSample and SampleFormat; null when not one of ours. */
export function sampleTypeOf(bits: number, format: number): SampleType | null {
  const name = `${PREFIXES[format]}${bits}`;
  return name in ARRAYS ? (name as SampleType) : null;
}

export function sampleFormat(type: SampleType): 1 | 2 | 3 {
  return type.startsWith('float') ? 3 : type.startsWith('int') ? 2 : 1;
}

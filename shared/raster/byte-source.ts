/** Where bytes come from: a file, memory, later an object store. */
export interface ByteSource {
  /** For messages: a path or an address. */
  readonly name: string;
  /** Bytes. */
  readonly size: number;
  /**
   * Exactly `length` bytes from `offset`.
   *
   * @throws BasinloomError RASTER_READ when reading fails; RASTER_TRUNCATED when the source ends before
   */
  read(offset: number, length: number): Promise<Uint8Array>;
  close(): Promise<void>;
}

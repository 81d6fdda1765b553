/**
 * The Store port: named byte strings. A name is written once with one content (artefacts are named by the hash
 * of what determines them); a reader sees the whole content or nothing, whatever crashes.
 *
 * Keys are relative paths of [a-z0-9._-] segments joined by "/".
 */
export interface Store {
  /** @throws BasinloomError STORE_READ */
  get(key: string): Promise<Uint8Array | null>;
  /** Atomic: temporary name, synced, renamed. @throws BasinloomError STORE_WRITE */
  put(key: string, bytes: Uint8Array): Promise<void>;
  /** Writes a large object from parts, atomically as a whole. */
  putStream(key: string, parts: AsyncIterable<Uint8Array>): Promise<{ size: number; sha256: string }>;
  /** Adds to the end of an object, for logs only: not atomic, and a crash may lose the last lines. */
  append(key: string, bytes: Uint8Array): Promise<void>;
  has(key: string): Promise<boolean>;
  /** Bytes of an object, or null when it is not there. */
  size(key: string): Promise<number | null>;
  /** Keys that begin with the prefix, sorted. */
  list(prefix: string): Promise<string[]>;
  delete(key: string): Promise<void>;
  /**
   * Removes what killed processes left half-written. Call it only while no other process writes.
   *
   * @returns how many things were removed
   */
  sweep(): Promise<number>;
  /** A printable name of the place, for messages. */
  readonly place: string;
}

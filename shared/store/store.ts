/**
 * The Store port: named byte strings. A name is written once with one content (artefacts are named by the hash
 * of what determines them); a reader sees the whole content or nothing, whatever crashes.
 *
 * Keys are relative paths of [A-Za-z0-9._-] segments joined by "/"; another key is INTERNAL.
 */
export interface Store {
  /** @throws BasinloomError STORE_READ */
  get(key: string): Promise<Uint8Array | null>;
  /** Atomic: readers see the old object or the new one. @throws BasinloomError STORE_WRITE, STORE_FULL */
  put(key: string, bytes: Uint8Array): Promise<void>;
  /**
   * Writes a large object from parts, atomically as a whole; when the source throws, nothing is changed.
   *
   * @throws BasinloomError of the source, STORE_WRITE, STORE_FULL
   */
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
   * Removes what killed processes left half-written. Others may write meanwhile: what may still be theirs is kept
   * for an hour.
   *
   * @returns how many things were removed
   */
  sweep(): Promise<number>;
  /** A printable name of the place, for messages. */
  readonly place: string;
}

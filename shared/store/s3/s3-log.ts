import type { S3Object, S3Objects } from './s3-objects.ts';

/** A piece that has grown to this is left alone, bytes. */
const PIECE_BYTES = 65_536;
/** Set on the first piece of a log: there may be more. */
const MARK = { 'basinloom-log': 'pieces' };
const PIECE = /\.log-\d{6}$/;

/** True for a further piece of a log, which is no object of its own. */
export const isLogPiece = (key: string): boolean => PIECE.test(key);

const pieceKey = (key: string, piece: number): string =>
  piece === 0 ? key : `${key}.log-${String(piece).padStart(6, '0')}`;
const isLog = ({ metadata }: Pick<S3Object, 'metadata'>): boolean => 'basinloom-log' in metadata;

/**
 * Logs on a store that cannot append. A log is a row of objects: the last piece is read and written again with the
 * new lines until it holds 64 KiB, then the next one is begun, so that a line costs one small read and one small
 * write however long the log grows. Other objects cost nothing for it: the first piece carries a mark.
 *
 * One process writes a log at a time (a run holds the lock of its store); two would lose lines of each other.
 */
export class S3Log {
  readonly #objects: S3Objects;
  /** The piece that a log grows in. */
  readonly #last = new Map<string, number>();
  readonly #queue = new Map<string, Promise<void>>();

  constructor(objects: S3Objects) {
    this.#objects = objects;
  }

  /** Appends of one log go one after another. @throws BasinloomError STORE_READ, STORE_WRITE */
  async append(key: string, bytes: Uint8Array): Promise<void> {
    const before = this.#queue.get(key) ?? Promise.resolve();
    const mine = before.catch(() => {}).then(() => this.#append(key, bytes));
    this.#queue.set(key, mine);
    try {
      await mine;
    } finally {
      if (this.#queue.get(key) === mine) this.#queue.delete(key);
    }
  }

  /** The object with all that follows its first piece. @throws BasinloomError STORE_READ */
  async whole(key: string, first: S3Object): Promise<Uint8Array> {
    if (!isLog(first)) return first.bytes;
    const pieces = [first.bytes];
    for (const piece of await this.#pieces(key)) {
      const more = await this.#objects.get(piece.key);
      if (more) pieces.push(more.bytes);
    }
    return Buffer.concat(pieces);
  }

  /** Bytes of the object with all its pieces. @throws BasinloomError STORE_READ */
  async size(key: string, first: { readonly size: number; readonly metadata: S3Object['metadata'] }): Promise<number> {
    if (!isLog(first)) return first.size;
    return (await this.#pieces(key)).reduce((sum, { size }) => sum + size, first.size);
  }

  /** Removes the further pieces of a log that is deleted or replaced. @throws BasinloomError STORE_WRITE */
  async forget(key: string): Promise<void> {
    this.#last.delete(key);
    for (const piece of await this.#pieces(key)) await this.#objects.delete(piece.key);
  }

  async #append(key: string, bytes: Uint8Array): Promise<void> {
    let piece = this.#last.get(key) ?? (await this.#lastPiece(key));
    let known = (await this.#objects.get(pieceKey(key, piece)))?.bytes ?? new Uint8Array();
    if (known.byteLength >= PIECE_BYTES) {
      piece++;
      known = new Uint8Array();
    }
    const metadata = piece === 0 ? MARK : {};
    await this.#objects.put(pieceKey(key, piece), Buffer.concat([known, bytes]), { metadata });
    this.#last.set(key, piece);
  }

  async #lastPiece(key: string): Promise<number> {
    const first = await this.#objects.head(key);
    if (!first || !isLog(first)) {
      await this.forget(key);
      return 0;
    }
    const last = (await this.#pieces(key)).at(-1);
    return last ? Number(last.key.slice(-6)) : 0;
  }

  async #pieces(key: string): Promise<{ key: string; size: number }[]> {
    return (await this.#objects.list(`${key}.log-`)).filter((piece) => isLogPiece(piece.key));
  }
}

import { setTimeout as sleep } from 'node:timers/promises';
import type { S3Access } from './s3-access.ts';
import { isAboutChecksums, isMissing, isNotImplemented, s3Failure, statusOf } from './s3-failure.ts';
import type { S3Location } from './s3-location.ts';

/** A body that breaks off, or whose checksum is wrong, is asked for so often; the SDK repeats requests only. */
const BODY_ATTEMPTS = 4;
/** Two conditional writes of one key at once: one of them is told to come again (409). */
const CONFLICT_ATTEMPTS = 6;
const CONFLICT_PAUSE_MS = 100;

export interface S3Object {
  readonly bytes: Uint8Array;
  readonly etag: string;
  readonly metadata: Readonly<Record<string, string>>;
}

export interface PutOptions {
  readonly metadata?: Record<string, string>;
  /** Write only when there is no object yet, or only over the one with this ETag. */
  readonly onlyIf?: 'new' | { readonly etag: string };
}

/**
 * What became of a write: `refused` when its condition did not hold, `unconditional` when it was written although
 * the endpoint knows no conditions.
 */
export type PutOutcome = 'written' | 'refused' | 'unconditional';

/** Single requests on the objects of a location, with errors of the table. Keys are without the prefix. */
export class S3Objects {
  readonly access: S3Access;
  readonly location: S3Location;

  constructor(access: S3Access, location: S3Location) {
    this.access = access;
    this.location = location;
  }

  /** How a request names an object. */
  target(key: string): { Bucket: string; Key: string } {
    return { Bucket: this.location.bucket, Key: `${this.location.prefix}${key}` };
  }

  failure(error: unknown, code: 'STORE_READ' | 'STORE_WRITE', key: string): Error {
    const { bucket, place } = this.location;
    return s3Failure(error, code, { bucket, path: key ? `${place}/${key}` : place });
  }

  /** A whole object, its checksum verified where the endpoint keeps one. @throws BasinloomError STORE_READ */
  async get(key: string): Promise<S3Object | null> {
    const { client, sdk } = await this.access.open();
    for (let attempt = 1; ; attempt++) {
      let answered = false;
      try {
        const { Body, ContentLength, ETag, Metadata } = await client.send(new sdk.GetObjectCommand(this.target(key)));
        answered = true;
        const bytes = (await Body?.transformToByteArray()) ?? new Uint8Array();
        if (ContentLength !== undefined && bytes.byteLength !== ContentLength) {
          throw new Error(`${bytes.byteLength} of ${ContentLength} bytes came`);
        }
        return { bytes, etag: ETag ?? '', metadata: Metadata ?? {} };
      } catch (error) {
        if (!answered && isMissing(error)) return null;
        if (!answered || attempt >= BODY_ATTEMPTS) throw this.failure(error, 'STORE_READ', key);
      }
    }
  }

  /** @throws BasinloomError STORE_READ */
  async head(key: string): Promise<{ size: number; metadata: Readonly<Record<string, string>> } | null> {
    const { client, sdk } = await this.access.open();
    try {
      const { ContentLength, Metadata } = await client.send(new sdk.HeadObjectCommand(this.target(key)));
      return { size: ContentLength ?? 0, metadata: Metadata ?? {} };
    } catch (error) {
      if (isMissing(error)) return null;
      throw this.failure(error, 'STORE_READ', key);
    }
  }

  /** @throws BasinloomError STORE_WRITE, STORE_FULL, STORE_DENIED, STORE_NO_BUCKET */
  async put(key: string, bytes: Uint8Array, { metadata, onlyIf }: PutOptions = {}): Promise<PutOutcome> {
    const { client, sdk } = await this.access.open();
    const { supports } = this.access;
    for (let attempt = 1; ; attempt++) {
      const conditional = onlyIf !== undefined && supports.conditions;
      const { checksums } = supports;
      const condition = onlyIf === 'new' ? { IfNoneMatch: '*' } : { IfMatch: onlyIf?.etag };
      try {
        await client.send(
          new sdk.PutObjectCommand({
            ...this.target(key),
            Body: bytes,
            ...(metadata && { Metadata: metadata }),
            ...(conditional && condition),
          }),
        );
        return onlyIf !== undefined && !conditional ? 'unconditional' : 'written';
      } catch (error) {
        if (conditional && (statusOf(error) === 412 || (onlyIf !== 'new' && isMissing(error)))) return 'refused';
        if (conditional && statusOf(error) === 409 && attempt < CONFLICT_ATTEMPTS) {
          await sleep(CONFLICT_PAUSE_MS * attempt);
        } else if (!this.doWithout(error, { conditional, checksums })) throw this.failure(error, 'STORE_WRITE', key);
      }
    }
  }

  /**
   * Gives up what an endpoint refuses to know.
   *
   * @param sent what the refused request made use of
   * @returns true when the request is worth another try
   */
  doWithout(error: unknown, sent: { readonly conditional: boolean; readonly checksums: boolean }): boolean {
    const { supports } = this.access;
    if (sent.conditional && isNotImplemented(error)) supports.conditions = false;
    else if (sent.checksums && isAboutChecksums(error)) supports.checksums = false;
    else return false;
    return true;
  }

  /** @throws BasinloomError STORE_WRITE */
  async delete(key: string): Promise<void> {
    const { client, sdk } = await this.access.open();
    try {
      await client.send(new sdk.DeleteObjectCommand(this.target(key)));
    } catch (error) {
      if (!isMissing(error)) throw this.failure(error, 'STORE_WRITE', key);
    }
  }

  /** Keys and sizes below a prefix, sorted by key. @throws BasinloomError STORE_READ */
  async list(prefix: string): Promise<{ key: string; size: number }[]> {
    const { client, sdk } = await this.access.open();
    const { Bucket, Key } = this.target(prefix);
    const found: { key: string; size: number }[] = [];
    try {
      for await (const { Contents = [] } of sdk.paginateListObjectsV2({ client }, { Bucket, Prefix: Key })) {
        for (const { Key: key = '', Size = 0 } of Contents) {
          found.push({ key: key.slice(this.location.prefix.length), size: Size });
        }
      }
    } catch (error) {
      throw this.failure(error, 'STORE_READ', prefix);
    }
    return found.sort((a, b) => (a.key < b.key ? -1 : 1));
  }
}

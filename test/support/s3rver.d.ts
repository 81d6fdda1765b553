/** What the tests use of s3rver, which comes without types. */
declare module 's3rver' {
  import type { IncomingMessage } from 'node:http';

  export interface S3Context {
    readonly req: IncomingMessage;
    readonly method: string;
    readonly path: string;
    readonly query: Readonly<Record<string, string | undefined>>;
    readonly headers: Readonly<Record<string, string | undefined>>;
    status: number;
    body: unknown;
    type: string;
    set(name: string, value: string): void;
  }

  export interface S3rverStore {
    readonly rootDirectory: string;
    getResourcePath(bucket: string, key: string | undefined, resource: string): string;
    putMetadata(bucket: string, key: string, metadata: object, md5: string): Promise<void>;
    existsObject(bucket: string, key: string): Promise<boolean>;
    getMetadata(bucket: string, key: string): Promise<Record<string, string>>;
    listObjects(
      bucket: string,
      options: { prefix?: string; startAfter?: string; maxKeys: number },
    ): Promise<{
      objects: { key: string; size: number; metadata: Record<string, string> }[];
      isTruncated: boolean;
    }>;
    putObject(object: {
      bucket: string;
      key: string;
      content: AsyncIterable<Uint8Array> | Buffer;
      metadata: object;
    }): Promise<{ size: number; md5: string }>;
    putPart(
      bucket: string,
      uploadId: string,
      part: string,
      content: AsyncIterable<Uint8Array>,
    ): Promise<{ size: number; md5: string }>;
  }

  export default class S3rver {
    constructor(options: {
      port: number;
      address: string;
      directory: string;
      silent: boolean;
      vhostBuckets: boolean;
      configureBuckets: { name: string }[];
    });
    readonly store: S3rverStore;
    readonly middleware: ((context: S3Context, next: () => Promise<void>) => Promise<void>)[];
    run(): Promise<{ port: number }>;
    close(): Promise<void>;
  }
}

import { createHash, randomUUID } from 'node:crypto';
import { createWriteStream } from 'node:fs';
import { mkdir, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import S3rver, { type S3Context } from 's3rver';
import { temporaryFolder } from './run-cli.ts';

export const BUCKET = 'basin-store';
/** The keys that s3rver knows. */
export const CREDENTIALS = { accessKeyId: 'S3RVER', secretAccessKey: 'S3RVER' } as const;

export interface S3Server {
  readonly url: string;
  /** Ids of the multipart uploads that are neither completed nor aborted. */
  uploads(): Promise<string[]>;
  /** Makes an upload as old as it says. */
  age(uploadId: string, begun: Date): void;
  /** Does what a request asks for, and breaks the connection instead of answering, once for each rule given. */
  loseAnswer(rule: (method: string, query: S3Context['query']) => boolean): void;
  /** Changes the stored bytes of an object behind the server's back. */
  damage(key: string, bytes: Uint8Array): Promise<void>;
  close(): Promise<void>;
}

export type S3Features = 'full' | 'no-conditions' | 'overlooks-conditions' | 'refuses-checksums';

/**
 * s3rver, which speaks S3 over HTTP and keeps objects in files, with what it lacks: objects that appear whole
 * (its own are seen half-written), abort and list of uploads, pages of a listing (its page marks need a cipher that
 * Node.js has no more), checksums kept with objects, and conditional writes. "full" is today's S3, the
 * other features are those of older endpoints.
 */
export async function startS3Server(features: S3Features = 'full'): Promise<S3Server> {
  const [directory, remove] = await temporaryFolder();
  const server = new S3rver({
    port: 0,
    address: '127.0.0.1',
    directory,
    silent: true,
    vhostBuckets: false,
    configureBuckets: [{ name: BUCKET }],
  });
  const { store } = server;
  const begun = new Map<string, Date>();
  const checksums = new Map<string, string>();
  const inTurn = turns();
  const uploadsFolder = store.getResourcePath(BUCKET, undefined, 'uploads');
  const uploads = (): Promise<string[]> => readdir(uploadsFolder).catch(() => []);

  store.putObject = async ({ bucket, key, content, metadata }) => {
    const path = store.getResourcePath(bucket, key, 'object');
    const written = await writeWhole(path, Buffer.isBuffer(content) ? [content] : content);
    await store.putMetadata(bucket, key, metadata, written.md5);
    return written;
  };
  store.putPart = async (bucket, uploadId, part, content) => {
    const path = join(store.getResourcePath(bucket, undefined, 'uploads'), uploadId, part);
    const written = await writeWhole(path, content);
    await writeFile(`${path}.md5`, written.md5);
    return written;
  };
  const losing: ((method: string, query: S3Context['query']) => boolean)[] = [];
  server.middleware.unshift(async ({ method, query, req }, next) => {
    await next();
    const lost = losing.findIndex((rule) => rule(method, query));
    if (lost < 0) return;
    losing.splice(lost, 1);
    req.socket.destroy();
  });
  server.middleware.splice(1, 0, async (context, next) => {
    const { method, query, headers } = context;
    const [, bucket = '', ...rest] = decodeURIComponent(context.path).split('/');
    const key = rest.join('/');
    // Who is unknown, or asks for another bucket, is told so by s3rver.
    const isKnown = headers.authorization?.includes(`Credential=${CREDENTIALS.accessKeyId}/`);
    if (bucket !== BUCKET || !isKnown) return next();
    if (
      features === 'refuses-checksums' &&
      Object.keys(headers).some((name) => /checksum-(crc|algorithm)/.test(name))
    ) {
      xml(context, 400, errorXml('InvalidArgument', "Unsupported header 'x-amz-sdk-checksum-algorithm' received"));
    } else if (method === 'POST' && query.uploadId && !(await uploads()).includes(query.uploadId)) {
      xml(context, 404, errorXml('NoSuchUpload'));
    } else if (method === 'DELETE' && query.uploadId) {
      await rm(join(uploadsFolder, query.uploadId), { recursive: true, force: true });
      context.status = 204;
    } else if (method === 'GET' && !key && 'uploads' in query) {
      const ids = await uploads();
      const found = ids.map(async (id) => ({ id, key: await readFile(join(uploadsFolder, id, 'key'), 'utf8') }));
      xml(
        context,
        200,
        uploadsXml((await Promise.all(found)).map((upload) => ({ ...upload, begun: begun.get(upload.id) }))),
      );
    } else if (method === 'GET' && !key && query['list-type'] === '2') {
      xml(context, 200, await listingXml(server, query));
    } else if (!key || (method === 'PUT' && query.uploadId)) {
      await next();
    } else {
      await inTurn(key, async () => {
        const refusal = method === 'PUT' ? await refusalOf(server, key, headers, features) : null;
        if (refusal) return xml(context, refusal, errorXml(refusal === 412 ? 'PreconditionFailed' : 'NotImplemented'));
        await next();
        const kept = checksums.get(key);
        if (method === 'GET' && kept && context.status === 200) context.set('x-amz-checksum-crc32', kept);
        if (method !== 'PUT' && method !== 'POST') return;
        const sent = headers['x-amz-checksum-crc32'];
        if (sent && method === 'PUT') checksums.set(key, sent);
        else checksums.delete(key);
      });
    }
  });
  const { port } = await server.run();
  return {
    url: `http://127.0.0.1:${port}`,
    uploads,
    age: (uploadId, when) => void begun.set(uploadId, when),
    loseAnswer: (rule) => void losing.push(rule),
    damage: async (key, bytes) => {
      const path = store.getResourcePath(BUCKET, key, 'object');
      await stat(path);
      await writeFile(path, bytes);
    },
    close: async () => {
      await server.close();
      await remove();
    },
  };
}

/** What is done to a key is done one after another: an object, its condition and its checksum are one thing. */
function turns(): (key: string, work: () => Promise<void>) => Promise<void> {
  const last = new Map<string, Promise<void>>();
  return (key, work) => {
    const mine = (last.get(key) ?? Promise.resolve()).catch(() => {}).then(work);
    last.set(key, mine);
    return mine;
  };
}

/** HTTP status of a write whose condition does not hold, or that the endpoint does not know. */
async function refusalOf(
  { store }: S3rver,
  key: string,
  headers: S3Context['headers'],
  features: S3Features,
): Promise<412 | 501 | null> {
  const { 'if-none-match': noneMatch, 'if-match': match } = headers;
  if ((!noneMatch && !match) || features === 'overlooks-conditions') return null;
  if (features === 'no-conditions') return 501;
  const etag = (await store.existsObject(BUCKET, key)) ? (await store.getMetadata(BUCKET, key)).etag : null;
  return (noneMatch && etag !== null) || (match && match !== etag) ? 412 : null;
}

async function writeWhole(
  path: string,
  content: AsyncIterable<Uint8Array> | Iterable<Uint8Array>,
): Promise<{ size: number; md5: string }> {
  const hash = createHash('md5');
  let size = 0;
  const temporary = `${path}.${randomUUID()}`;
  await mkdir(dirname(path), { recursive: true });
  await pipeline(
    Readable.from(content),
    async function* (parts: AsyncIterable<Uint8Array>) {
      for await (const part of parts) {
        hash.update(part);
        size += part.byteLength;
        yield part;
      }
    },
    createWriteStream(temporary),
  );
  await rename(temporary, path);
  return { size, md5: hash.digest('hex') };
}

function xml(context: S3Context, status: number, body: string): void {
  context.status = status;
  context.type = 'application/xml';
  context.body = `<?xml version="1.0" encoding="UTF-8"?>\n${body}`;
}

const errorXml = (code: string, message = code) => `<Error><Code>${code}</Code><Message>${message}</Message></Error>`;

function uploadsXml(uploads: readonly { id: string; key: string; begun: Date | undefined }[]): string {
  const entries = uploads.map(
    ({ id, key, begun = new Date() }) =>
      `<Upload><Key>${key}</Key><UploadId>${id}</UploadId><Initiated>${begun.toISOString()}</Initiated></Upload>`,
  );
  return `<ListMultipartUploadsResult>${entries.join('')}<IsTruncated>false</IsTruncated></ListMultipartUploadsResult>`;
}

/** A page of at most a thousand keys, as S3 gives them; the mark of the next page is the last key. */
async function listingXml({ store }: S3rver, query: S3Context['query']): Promise<string> {
  const { objects, isTruncated } = await store.listObjects(BUCKET, {
    prefix: query.prefix ?? '',
    startAfter: query['continuation-token'] ?? '',
    maxKeys: 1000,
  });
  const contents = objects.map(({ key, size }) => `<Contents><Key>${key}</Key><Size>${size}</Size></Contents>`);
  const next = isTruncated ? `<NextContinuationToken>${objects.at(-1)?.key}</NextContinuationToken>` : '';
  return `<ListBucketResult>${contents.join('')}${next}<IsTruncated>${isTruncated}</IsTruncated></ListBucketResult>`;
}

import { CreateMultipartUploadCommand } from '@aws-sdk/client-s3';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { S3Store } from '../../../shared/store/s3-store.ts';
import { accessTo } from '../../support/s3-access.ts';
import { BUCKET, type S3Features, type S3Server, startS3Server } from '../../support/s3-server.ts';
import { storeConformance } from './store-conformance.ts';

const text = (value: string) => Buffer.from(value);
const artefact = `artefacts/flux/0f/0f${'1'.repeat(38)}`;

function conformance(features: S3Features, location: string): void {
  storeConformance(`${location}, endpoint: ${features}`, async () => {
    const server = await startS3Server(features);
    const access = accessTo(server.url);
    return {
      store: new S3Store(location, access),
      other: new S3Store(location, accessTo(server.url)),
      unfinished: () => server.uploads(),
      close: async () => {
        (await access.open()).client.destroy();
        await server.close();
      },
    };
  });
}
conformance('full', `s3://${BUCKET}/some/prefix/`);
conformance('no-conditions', `s3://${BUCKET}`);

describe('S3 store', () => {
  let server: S3Server;
  let store: S3Store;

  beforeAll(async () => {
    server = await startS3Server();
    store = new S3Store(`s3://${BUCKET}/p`, accessTo(server.url));
  });
  afterAll(() => server.close());

  it('leaves a content-named artefact that is there as it is, and remembers when an endpoint knows no conditions', async () => {
    await store.put(artefact, text('first'));
    await store.put(artefact, text('other'));
    expect(Buffer.from((await store.get(artefact)) ?? []).toString()).toBe('first');

    const old = await startS3Server('no-conditions');
    try {
      const access = accessTo(old.url);
      const plain = new S3Store(`s3://${BUCKET}/p`, access);
      await plain.put(artefact, text('first'));
      expect(access.supports).toEqual({ conditions: false, checksums: true });
      await plain.put(artefact, text('second'));
      expect(Buffer.from((await plain.get(artefact)) ?? []).toString()).toBe('second');
    } finally {
      await old.close();
    }
  });

  it('refuses bytes that do not match the checksum of the endpoint', async () => {
    await store.put('rotten', text('healthy'));
    await server.damage('p/rotten', text('damaged'));
    await expect(store.get('rotten')).rejects.toMatchObject({
      code: 'STORE_READ',
      message: expect.stringContaining(`s3://${BUCKET}/p/rotten`),
      retryable: true,
    });
  });

  it('aborts uploads of this prefix that are older than an hour, and no others', async () => {
    const { client } = await accessTo(server.url).open();
    const begin = async (key: string, minutes: number) => {
      const { UploadId = '' } = await client.send(new CreateMultipartUploadCommand({ Bucket: BUCKET, Key: key }));
      server.age(UploadId, new Date(Date.now() - minutes * 60_000));
      return UploadId;
    };
    await begin('p/products/old.tif', 61);
    const kept = await begin('p/products/young.tif', 59);
    expect(await store.sweep()).toBe(1);
    expect(await server.uploads()).toEqual([kept]);
  });

  it('knows its own upload when the answer to its end was lost', async () => {
    async function* large() {
      for (let i = 0; i < 4; i++) yield Buffer.alloc(8_000_000, i);
    }
    let asked = 0;
    const isEnd = (method: string, query: Readonly<Record<string, string | undefined>>) =>
      method === 'POST' && query.uploadId !== undefined;
    server.loseAnswer((method, query) => isEnd(method, query) && ++asked > 0);
    expect(await store.putStream('products/large.tif', large())).toMatchObject({ size: 32_000_000 });
    expect(asked).toBe(1);
    expect(await store.size('products/large.tif')).toBe(32_000_000);
  });

  it('knows its own artefact when the answer to its write was lost', async () => {
    const key = `artefacts/day/0f/0f${'2'.repeat(38)}`;
    server.loseAnswer((method) => method === 'PUT');
    await store.put(key, text('mine'));
    expect(Buffer.from((await store.get(key)) ?? []).toString()).toBe('mine');
  });

  it('does without checksums where an endpoint refuses them', async () => {
    const strict = await startS3Server('refuses-checksums');
    try {
      const access = accessTo(strict.url);
      const plain = new S3Store(`s3://${BUCKET}/p`, access);
      async function* large() {
        for (let i = 0; i < 4; i++) yield Buffer.alloc(8_000_000, i);
      }
      // The source of a stream is used up by the first try; the job's next one succeeds.
      await expect(plain.putStream('large', large())).rejects.toMatchObject({ code: 'STORE_WRITE', retryable: true });
      await plain.putStream('large', large());
      expect(await plain.size('large')).toBe(32_000_000);
      expect(access.supports.checksums).toBe(false);

      const fresh = accessTo(strict.url);
      await new S3Store(`s3://${BUCKET}/p`, fresh).put('small', text('x'));
      expect(fresh.supports).toEqual({ conditions: true, checksums: false });
    } finally {
      await strict.close();
    }
  });

  it('says that a bucket is missing, and how to mend it', async () => {
    const nowhere = new S3Store('s3://no-such-bucket', accessTo(server.url));
    const missing = {
      code: 'STORE_NO_BUCKET',
      retryable: false,
      message: expect.stringContaining('s3://no-such-bucket'),
    };
    await expect(nowhere.put('a', text('x'))).rejects.toMatchObject(missing);
    await expect(nowhere.get('a')).rejects.toMatchObject(missing);
    await expect(nowhere.list('')).rejects.toMatchObject(missing);
  });

  it('says that access is denied', async () => {
    const access = accessTo(server.url);
    (await access.open()).client.config.credentials = async () => ({
      accessKeyId: 'nobody',
      secretAccessKey: 'nothing',
    });
    const stranger = new S3Store(`s3://${BUCKET}`, access);
    const denied = { code: 'STORE_DENIED', retryable: false };
    await expect(stranger.put('a', text('x'))).rejects.toMatchObject(denied);
    await expect(stranger.has('a')).rejects.toMatchObject(denied);
    await expect(stranger.list('')).rejects.toMatchObject(denied);
  });

  it('says that the endpoint does not answer', async () => {
    const gone = await startS3Server();
    await gone.close();
    const deaf = new S3Store(`s3://${BUCKET}/p`, accessTo(gone.url));
    await expect(deaf.get('a')).rejects.toMatchObject({ code: 'STORE_READ', retryable: true });
    await expect(deaf.put('a', text('x'))).rejects.toMatchObject({
      code: 'STORE_WRITE',
      retryable: true,
      message: expect.stringMatching(/ECONNREFUSED/),
    });
  });
});

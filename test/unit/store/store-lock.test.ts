import { execFileSync, spawn } from 'node:child_process';
import { once } from 'node:events';
import { readdir, readFile, rm, utimes, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { LocalStore } from '../../../shared/store/local-store.ts';
import { S3Store } from '../../../shared/store/s3-store.ts';
import type { Store } from '../../../shared/store/store.ts';
import { lockStore } from '../../../shared/store/store-lock.ts';
import { thisHost } from '../../../shared/store/this-host.ts';
import { temporaryFolder } from '../../support/run-cli.ts';
import { accessTo } from '../../support/s3-access.ts';
import { BUCKET, CREDENTIALS, type S3Features, startS3Server } from '../../support/s3-server.ts';

interface Place {
  readonly location: string;
  readonly store: Store;
  readonly env: Readonly<Record<string, string>>;
  lock(): Promise<() => Promise<void>>;
  close(): Promise<void>;
}

async function folderPlace(): Promise<Place> {
  const [folder, remove] = await temporaryFolder();
  return { location: folder, store: new LocalStore(folder), env: {}, lock: () => lockStore(folder), close: remove };
}

async function s3Place(features: S3Features): Promise<Place> {
  const server = await startS3Server(features);
  const location = `s3://${BUCKET}/run`;
  const access = accessTo(server.url);
  return {
    location,
    store: new S3Store(location, access),
    env: {
      AWS_ENDPOINT_URL_S3: server.url,
      AWS_ACCESS_KEY_ID: CREDENTIALS.accessKeyId,
      AWS_SECRET_ACCESS_KEY: CREDENTIALS.secretAccessKey,
    },
    lock: () => lockStore(location, access),
    close: server.close,
  };
}

const LOCKED = { code: 'RUN_LOCKED' };
const minutesAgo = (minutes: number) => new Date(Date.now() - minutes * 60_000).toISOString();
/** Number of a process that has ended. */
const deadPid = () => Number(execFileSync(process.execPath, ['-p', 'process.pid']).toString());

const places: [string, () => Promise<Place>][] = [
  ['folder', folderPlace],
  ['s3', () => s3Place('full')],
  ['s3 without conditional writes', () => s3Place('no-conditions')],
  ['s3 that overlooks conditions', () => s3Place('overlooks-conditions')],
];

describe.each(places)('store lock: %s', (_, open) => {
  let place: Place;
  beforeAll(async () => {
    place = await open();
  });
  afterAll(() => place.close());
  beforeEach(() => place.store.delete('.lock'));

  const leave = async (lock: object) => {
    const whole = { host: thisHost, pid: process.ppid, token: 'theirs', refreshed: minutesAgo(0), ...lock };
    await place.store.put('.lock', Buffer.from(JSON.stringify(whole)));
  };
  const holder = async () => JSON.parse(Buffer.from((await place.store.get('.lock')) ?? []).toString());
  const isFree = async () => {
    const release = await place.lock();
    expect(await holder()).toMatchObject({ host: thisHost, pid: process.pid });
    await release();
    expect(await place.store.has('.lock')).toBe(false);
  };

  it('keeps a second run out, of this process too, and lets it in after release', async () => {
    const release = await place.lock();
    await expect(place.lock()).rejects.toMatchObject(LOCKED);
    await release();
    await isFree();
  });

  it('names the holder, however long a live process of this host was silent', async () => {
    await leave({ refreshed: minutesAgo(30) });
    await expect(place.lock()).rejects.toThrow(`process ${process.ppid} on ${thisHost}`);
  });

  it('takes over the lock of a dead process of this host at once', async () => {
    await leave({ pid: deadPid() });
    await isFree();
  });

  it('takes over the lock of an earlier process that had our number', async () => {
    await leave({ pid: process.pid });
    await isFree();
  });

  it('leaves a lock of another host alone until it was silent for two minutes', async () => {
    await leave({ host: 'elsewhere', pid: deadPid(), refreshed: minutesAgo(1.9) });
    await expect(place.lock()).rejects.toMatchObject(LOCKED);
    await leave({ host: 'elsewhere', pid: process.ppid, refreshed: minutesAgo(2.1) });
    await isFree();
  });

  it('does not remove a lock that another took over', async () => {
    const release = await place.lock();
    await leave({ host: 'elsewhere' });
    await release();
    expect(await holder()).toMatchObject({ token: 'theirs' });
  });

  it('gives one of many the lock that nobody holds', async () => {
    for (const prepare of [async () => {}, () => leave({ host: 'elsewhere', refreshed: minutesAgo(6) })]) {
      await place.store.delete('.lock');
      await prepare();
      const tries = await Promise.allSettled(Array.from({ length: 8 }, () => place.lock()));
      const won = tries.filter((result) => result.status === 'fulfilled');
      const lost = tries.flatMap((result) => (result.status === 'rejected' ? [result.reason.code] : []));
      expect(won).toHaveLength(1);
      expect(lost).toEqual(Array(7).fill('RUN_LOCKED'));
      await won[0].value();
    }
  });

  it('gives one of many processes the lock of a dead one', async () => {
    await leave({ pid: deadPid() });
    const file = fileURLToPath(new URL('lock-process.ts', import.meta.url));
    const processes = Array.from({ length: 4 }, () => {
      const child = spawn(process.execPath, [file, place.location], {
        stdio: ['pipe', 'pipe', 'inherit'],
        env: { ...process.env, ...place.env },
      });
      return {
        child,
        said: once(child.stdout, 'data').then(([line]) => String(line).trim()),
        ended: once(child, 'exit'),
      };
    });
    const said = await Promise.all(processes.map((one) => one.said));
    for (const { child } of processes) child.stdin.end();
    await Promise.all(processes.map((one) => one.ended));
    expect(said.sort()).toEqual(['RUN_LOCKED', 'RUN_LOCKED', 'RUN_LOCKED', 'got']);
    expect(await place.store.has('.lock')).toBe(false);
  });

  it('gives a sign of life three times a minute, never into a lock of another', async () => {
    vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval', 'Date'] });
    try {
      const release = await place.lock();
      const before = await holder();
      vi.advanceTimersByTime(20_000);
      await vi.waitFor(async () => {
        const { token, refreshed } = await holder();
        expect(token).toBe(before.token);
        expect(Date.parse(refreshed) - Date.parse(before.refreshed)).toBe(20_000);
      });
      await leave({ host: 'elsewhere' });
      const theirs = await holder();
      vi.advanceTimersByTime(20_000);
      await release();
      expect(await holder()).toEqual(theirs);
    } finally {
      vi.useRealTimers();
    }
  });
});

describe('lock file', () => {
  let place: Place;
  beforeEach(async () => {
    place = await folderPlace();
  });
  afterEach(() => place.close());

  it('takes one that was left half-written for held until its time is over', async () => {
    const path = join(place.location, '.lock');
    await writeFile(path, '{"host":');
    await expect(place.lock()).rejects.toMatchObject(LOCKED);
    const old = new Date(Date.now() - 301_000);
    await utimes(path, old, old);
    const release = await place.lock();
    await release();
    expect(await readdir(place.location)).toEqual([]);
  });

  it('gets past a claim that was left by a process that died over it', async () => {
    const claim = join(place.location, '.lock-claim');
    await writeFile(
      join(place.location, '.lock'),
      JSON.stringify({ host: thisHost, pid: deadPid(), token: 'x', refreshed: minutesAgo(1) }),
    );
    await writeFile(claim, '');
    await expect(place.lock()).rejects.toMatchObject(LOCKED);
    const old = new Date(Date.now() - 61_000);
    await utimes(claim, old, old);
    await (await place.lock())();
  });

  it('is one line of JSON', async () => {
    const release = await place.lock();
    const text = await readFile(join(place.location, '.lock'), 'utf8');
    expect(Object.keys(JSON.parse(text)).sort()).toEqual(['host', 'pid', 'refreshed', 'token']);
    expect(text.endsWith('}\n')).toBe(true);
    await release();
    await rm(place.location, { recursive: true });
  });
});

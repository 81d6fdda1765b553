import { execFileSync } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import { mkdtemp, readdir, rm, stat, utimes, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { LocalStore, writeFailure } from '../../../shared/store/local-store.ts';
import { thisHost } from '../../../shared/store/this-host.ts';
import { storeConformance } from './store-conformance.ts';

storeConformance('folder', async () => {
  const folder = await mkdtemp(join(tmpdir(), 'basinloom-store-'));
  return {
    store: new LocalStore(folder),
    other: new LocalStore(folder),
    unfinished: async () => (await readdir(folder, { recursive: true })).filter((path) => path.includes('.part-')),
    close: () => rm(folder, { recursive: true, force: true }),
  };
});

let folder: string;
let store: LocalStore;

beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'basinloom-store-'));
  store = new LocalStore(folder);
});
afterEach(() => rm(folder, { recursive: true, force: true }));

const text = (value: string) => Buffer.from(value);

describe('local store', () => {
  it('does not take a folder for an object', async () => {
    await store.put('a/b/c.bin', text('hello'));
    expect(await store.size('a')).not.toBe(5);
  });

  it('names the path when it cannot write', async () => {
    await store.put('file', text('x'));
    await expect(store.put('file/below', text('x'))).rejects.toMatchObject({ code: 'STORE_WRITE', retryable: true });
  });

  it('lists no unfinished file', async () => {
    await store.put('runs/a/run.json', text('1'));
    await writeFile(join(folder, 'runs/a/.part-123'), 'half');
    expect(await store.list('runs/')).toEqual(['runs/a/run.json']);
  });

  it.each(['ENOSPC', 'EDQUOT'])('calls %s a full disk', (code) => {
    const error = writeFailure(Object.assign(new Error('no space'), { code }), 'out/file');
    expect(error).toMatchObject({ code: 'STORE_FULL', retryable: true });
  });

  it('names unfinished files after host and process, while they are written', async () => {
    let seen: string[] = [];
    async function* looking() {
      yield text('half');
      seen = await readdir(folder);
    }
    await store.putStream('s', looking());
    expect(seen).toEqual([expect.stringMatching(new RegExp(`^\\.part-${thisHost}-${process.pid}-[0-9a-f-]{36}$`))]);
  });

  it('sweeps what dead processes of this host left, and what nobody touched for an hour', async () => {
    const dead = execFileSync(process.execPath, ['-p', 'process.pid']).toString().trim();
    const leave = async (owner: string, minutes: number) => {
      const name = `.part-${owner}-${randomUUID()}`;
      await writeFile(join(folder, name), 'half');
      const when = new Date(Date.now() - minutes * 60_000);
      await utimes(join(folder, name), when, when);
      return name;
    };
    await store.put('whole', text('kept'));
    await leave(`${thisHost}-${dead}`, 0);
    await leave(`${thisHost}-${process.ppid}`, 61);
    await leave('other-host.example-17', 61);
    await leave('unknown', 61);
    const kept = [
      await leave(`${thisHost}-${process.ppid}`, 59),
      await leave(`other-host.example-${dead}`, 59),
      await leave('unknown', 59),
    ];
    expect(await store.sweep()).toBe(4);
    expect((await readdir(folder)).sort()).toEqual([...kept, 'whole'].sort());
    await expect(stat(join(folder, 'whole'))).resolves.toBeDefined();
  });
});

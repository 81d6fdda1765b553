import { mkdtemp, readdir, rm, stat, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { LocalStore } from '../../../shared/store/local-store.ts';
import { lockFolder } from '../../../shared/store/store-lock.ts';

let folder: string;
let store: LocalStore;

beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'basinloom-store-'));
  store = new LocalStore(folder);
});
afterEach(() => rm(folder, { recursive: true, force: true }));

const text = (value: string) => Buffer.from(value);
async function* parts(...values: string[]) {
  for (const value of values) yield text(value);
}

describe('local store', () => {
  it('gives back what was put, and null for what was not', async () => {
    await store.put('a/b/c.bin', text('hello'));
    expect(Buffer.from((await store.get('a/b/c.bin')) ?? []).toString()).toBe('hello');
    expect(await store.get('a/b/missing')).toBeNull();
    expect(await store.has('a/b/c.bin')).toBe(true);
    expect(await store.size('a/b/c.bin')).toBe(5);
    expect(await store.size('a')).not.toBe(5);
  });

  it('replaces an object as a whole', async () => {
    await store.put('x', text('first, and longer'));
    await store.put('x', text('second'));
    expect(Buffer.from((await store.get('x')) ?? []).toString()).toBe('second');
  });

  it('writes a stream with its size and SHA-256 (FIPS 180-4 example "abc")', async () => {
    const written = await store.putStream('s', parts('a', 'b', 'c'));
    expect(written).toEqual({ size: 3, sha256: 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad' });
  });

  it('leaves the old object and no temporary file when a stream fails', async () => {
    await store.put('s', text('old'));
    async function* failing() {
      yield text('new');
      throw new Error('lost');
    }
    await expect(store.putStream('s', failing())).rejects.toMatchObject({ code: 'STORE_WRITE' });
    expect(Buffer.from((await store.get('s')) ?? []).toString()).toBe('old');
    expect(await readdir(folder)).toEqual(['s']);
  });

  it('lists by prefix, sorted, without unfinished files; sweep removes those', async () => {
    await store.put('runs/b/run.json', text('1'));
    await store.put('runs/a/run.json', text('1'));
    await store.put('other', text('1'));
    await writeFile(join(folder, 'runs/a/.part-123'), 'half');
    expect(await store.list('runs/')).toEqual(['runs/a/run.json', 'runs/b/run.json']);
    expect(await store.sweep()).toBe(1);
    await expect(stat(join(folder, 'runs/a/.part-123'))).rejects.toThrow();
    expect(await store.list('nothing/')).toEqual([]);
  });

  it('appends to a log and deletes', async () => {
    await store.append('log', text('one\n'));
    await store.append('log', text('two\n'));
    expect(Buffer.from((await store.get('log')) ?? []).toString()).toBe('one\ntwo\n');
    await store.delete('log');
    await store.delete('log');
    expect(await store.has('log')).toBe(false);
  });

  it.each(['../escape', '/etc/passwd', 'a/../../b', '', 'a//b', 'a b', '.', 'a/.'])(
    'refuses the key "%s"',
    async (key) => {
      await expect(store.put(key, text('x'))).rejects.toMatchObject({ code: 'INTERNAL' });
    },
  );

  it('names the path when it cannot write', async () => {
    await store.put('file', text('x'));
    await expect(store.put('file/below', text('x'))).rejects.toMatchObject({ code: 'STORE_WRITE', retryable: true });
  });
});

describe('folder lock', () => {
  it('keeps a second run out and lets it in after release', async () => {
    const release = await lockFolder(folder);
    // The same process may hold a stale lock of its own number: only another live process locks it out.
    await writeFile(join(folder, '.lock'), String(process.ppid));
    await expect(lockFolder(folder)).rejects.toMatchObject({ code: 'RUN_LOCKED' });
    await release();
    const again = await lockFolder(folder);
    await again();
  });

  it('takes over the lock of a process that is gone', async () => {
    await writeFile(join(folder, '.lock'), '999999999');
    const release = await lockFolder(folder);
    await release();
  });
});

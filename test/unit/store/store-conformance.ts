import { createHash } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Store } from '../../../shared/store/store.ts';

/** A store for the suite, empty, with what only its kind can tell. */
export interface StoreUnderTest {
  readonly store: Store;
  /** A second store on the same place, as another process has it. */
  readonly other: Store;
  /** What is in the place beside finished objects: temporary files, uploads that are neither completed nor aborted. */
  unfinished(): Promise<string[]>;
  close(): Promise<void>;
}

const text = (value: string) => Buffer.from(value);
const read = async (store: Store, key: string) => Buffer.from((await store.get(key)) ?? text('(nothing)')).toString();

async function* parts(...values: (string | Uint8Array)[]) {
  for (const value of values) yield typeof value === 'string' ? text(value) : value;
}

/** Bytes that are no pattern: xorshift32. */
function noise(length: number, seed: number): Uint8Array {
  const words = new Uint32Array(Math.ceil(length / 4));
  let state = seed;
  for (let i = 0; i < words.length; i++) {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    words[i] = state;
  }
  return new Uint8Array(words.buffer, 0, length);
}

const artefact = (digit: string) => `artefacts/flux/${digit}${digit}/${digit.repeat(40)}`;

/** Every promise of the Store port, held against one kind of store. */
export function storeConformance(name: string, make: () => Promise<StoreUnderTest>): void {
  describe(`store port: ${name}`, () => {
    let under: StoreUnderTest;
    let store: Store;

    beforeAll(async () => {
      under = await make();
      store = under.store;
    });
    afterAll(() => under.close());

    it('gives back what was put, byte for byte, and null for what was not', async () => {
      const bytes = noise(100_000, 7);
      await store.put('a/b/c.bin', bytes);
      expect(Buffer.from((await store.get('a/b/c.bin')) ?? []).equals(Buffer.from(bytes))).toBe(true);
      expect(await store.get('a/b/missing')).toBeNull();
      expect(await store.get('missing/folder/file')).toBeNull();
      expect(await store.has('a/b/c.bin')).toBe(true);
      expect(await store.has('a/b/missing')).toBe(false);
      expect(await store.size('a/b/c.bin')).toBe(100_000);
      expect(await store.size('a/b/missing')).toBeNull();
    });

    it('keeps an empty object', async () => {
      await store.put('empty', new Uint8Array());
      expect(await store.size('empty')).toBe(0);
      expect(await store.get('empty')).toHaveLength(0);
    });

    it('shows another process what was written', async () => {
      await store.put('shared', text('for all'));
      expect(await read(under.other, 'shared')).toBe('for all');
    });

    it('replaces an object as a whole', async () => {
      await store.put('x', text('first, and longer'));
      await store.put('x', text('second'));
      expect(await read(store, 'x')).toBe('second');
      await store.put('artefacts/published/2025-06-01/et-day', text('one'));
      await store.put('artefacts/published/2025-06-01/et-day', text('two'));
      expect(await read(store, 'artefacts/published/2025-06-01/et-day')).toBe('two');
    });

    it('takes a content-named artefact again', async () => {
      await store.put(artefact('a'), text('same'));
      await under.other.put(artefact('a'), text('same'));
      expect(await read(store, artefact('a'))).toBe('same');
    });

    it.each([artefact('b'), 'products/when/what'])('survives many puts of %s at once', async (key) => {
      const content = noise(200_000, 3);
      await Promise.all(Array.from({ length: 12 }, (_, i) => (i % 2 ? store : under.other).put(key, content)));
      expect(Buffer.from((await store.get(key)) ?? []).equals(Buffer.from(content))).toBe(true);
      expect(await under.unfinished()).toEqual([]);
    });

    it('writes a stream with its size and SHA-256 (FIPS 180-4 example "abc")', async () => {
      const written = await store.putStream('s', parts('a', 'b', '', 'c'));
      expect(written).toEqual({ size: 3, sha256: 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad' });
      expect(await read(store, 's')).toBe('abc');
      expect(await store.putStream('none', parts())).toMatchObject({ size: 0 });
      expect(await store.size('none')).toBe(0);
    });

    it('writes a stream larger than the parts of an upload', async () => {
      // Pieces of odd length, so that no part ends where a piece does.
      const pieces = Array.from({ length: 9 }, (_, i) => noise(4_999_999 + i, i + 1));
      const hash = createHash('sha256');
      for (const piece of pieces) hash.update(piece);
      const sha256 = hash.digest('hex');
      const size = pieces.reduce((sum, piece) => sum + piece.length, 0);
      expect(await store.putStream('large', parts(...pieces))).toEqual({ size, sha256 });
      expect(await store.size('large')).toBe(size);
      const back = createHash('sha256').update((await store.get('large')) ?? new Uint8Array());
      expect(back.digest('hex')).toBe(sha256);
      expect(await under.unfinished()).toEqual([]);
    });

    it.each([1, 40_000_000])(
      'leaves the old object and nothing else when a stream breaks after %i bytes',
      async (length) => {
        await store.put('breaks', text('old'));
        async function* failing() {
          yield noise(length, 5);
          throw new Error('lost');
        }
        await expect(store.putStream('breaks', failing())).rejects.toMatchObject({ code: 'STORE_WRITE' });
        await expect(store.putStream('never', failing())).rejects.toThrow(/never.*lost/);
        expect(await read(store, 'breaks')).toBe('old');
        expect(await store.has('never')).toBe(false);
        expect(await under.unfinished()).toEqual([]);
      },
    );

    it('lists by prefix, sorted, with and without an end slash', async () => {
      for (const key of ['runs/b/run.json', 'runs/a/run.json', 'runs/a/z', 'runs/a-b', 'runs2/x', 'running']) {
        await store.put(key, text('1'));
      }
      expect(await store.list('runs/')).toEqual(['runs/a-b', 'runs/a/run.json', 'runs/a/z', 'runs/b/run.json']);
      expect(await store.list('runs/a')).toEqual(['runs/a-b', 'runs/a/run.json', 'runs/a/z']);
      expect(await store.list('run')).toEqual([
        'running',
        'runs/a-b',
        'runs/a/run.json',
        'runs/a/z',
        'runs/b/run.json',
        'runs2/x',
      ]);
      expect(await store.list('nothing/')).toEqual([]);
      expect(await store.list('')).toEqual(expect.arrayContaining(['running', 'runs/a-b']));
    });

    it('lists more keys than a page holds', async () => {
      const keys = Array.from({ length: 1100 }, (_, i) => `many/${String(i).padStart(4, '0')}`);
      for (let from = 0; from < keys.length; from += 50) {
        await Promise.all(keys.slice(from, from + 50).map((key) => store.put(key, text('1'))));
      }
      expect(await store.list('many/')).toEqual(keys);
    });

    it('appends to a log, in order, across processes that follow one another', async () => {
      for (const line of ['one\n', 'two\n', 'three\n']) await store.append('runs/r/events.ndjson', text(line));
      await under.other.append('runs/r/events.ndjson', text('another process\n'));
      expect(await read(store, 'runs/r/events.ndjson')).toBe('one\ntwo\nthree\nanother process\n');
    });

    it('loses no line that one process appends while it appends others', async () => {
      const lines = Array.from({ length: 30 }, (_, i) => `line ${i}`);
      await Promise.all(lines.map((line) => store.append('logs/at-once', text(`${line}\n`))));
      const found = (await read(store, 'logs/at-once')).trimEnd().split('\n');
      expect(found.sort()).toEqual(lines.sort());
    });

    it('keeps a long log whole, and one key', async () => {
      const lines = Array.from({ length: 40 }, (_, i) => `${String(i).padStart(8, '0')} ${'x'.repeat(8000)}\n`);
      for (const [i, line] of lines.entries()) await (i < 20 ? store : under.other).append('logs/long', text(line));
      const whole = lines.join('');
      expect(await read(store, 'logs/long')).toBe(whole);
      expect(await store.size('logs/long')).toBe(whole.length);
      expect(await store.list('logs/long')).toEqual(['logs/long']);
      await store.delete('logs/long');
      expect(await store.get('logs/long')).toBeNull();
      await store.append('logs/long', text('anew'));
      expect(await read(under.other, 'logs/long')).toBe('anew');
    });

    it('replaces a log as a whole', async () => {
      for (let i = 0; i < 3; i++) await store.append('logs/replaced', noise(70_000, i + 1));
      await store.put('logs/replaced', text('new'));
      expect(await read(store, 'logs/replaced')).toBe('new');
      await under.other.append('logs/replaced', text(' and more'));
      expect(await read(store, 'logs/replaced')).toBe('new and more');
    });

    it('deletes, also what is not there', async () => {
      await store.put('gone', text('x'));
      await store.delete('gone');
      await store.delete('gone');
      await store.delete('never/was');
      expect(await store.has('gone')).toBe(false);
    });

    it.each([
      '../escape',
      '/etc/passwd',
      'a/../../b',
      '',
      'a//b',
      'a b',
      '.',
      'a/.',
      'a/',
      'a\\b',
      'a\nb',
      'Ḱ',
      'größe',
      'a%2Fb',
    ])('refuses the key "%s" everywhere', async (key) => {
      const refusal = { code: 'INTERNAL' };
      await expect(async () => store.put(key, text('x'))).rejects.toMatchObject(refusal);
      await expect(async () => store.putStream(key, parts('x'))).rejects.toMatchObject(refusal);
      await expect(async () => store.append(key, text('x'))).rejects.toMatchObject(refusal);
      await expect(async () => store.get(key)).rejects.toMatchObject(refusal);
      await expect(async () => store.has(key)).rejects.toMatchObject(refusal);
      await expect(async () => store.size(key)).rejects.toMatchObject(refusal);
      await expect(async () => store.delete(key)).rejects.toMatchObject(refusal);
    });

    it('sweeps nothing where nothing was left', async () => {
      expect(await store.sweep()).toBe(0);
      expect(await read(store, 'shared')).toBe('for all');
    });
  });
}

import { setTimeout as sleep } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { lookAhead } from '../../../services/coordinator/look-ahead.ts';

async function collect<T>(items: AsyncIterable<T>): Promise<T[]> {
  const all: T[] = [];
  for await (const item of items) all.push(item);
  return all;
}

describe('looking ahead', () => {
  it('keeps the order of the items, whichever answer comes first', async () => {
    const answers = lookAhead([5, 1, 3, 0], (item) => sleep(item, item * 2), 3);
    expect(await collect(answers)).toEqual([
      [5, 10],
      [1, 2],
      [3, 6],
      [0, 0],
    ]);
  });

  it('asks no more than its width ahead of the reader', async () => {
    let asked = 0;
    let read = 0;
    let most = 0;
    const items = Array.from({ length: 50 }, (_, index) => index);
    const ask = (item: number) => {
      asked++;
      most = Math.max(most, asked - read);
      return Promise.resolve(item);
    };
    for await (const _ of lookAhead(items, ask, 8)) read++;
    expect(read).toBe(50);
    expect(most).toBeLessThanOrEqual(9);
  });

  it('throws a failure where its answer is read', async () => {
    const answers = lookAhead([1, 2, 3], (item) => (item === 2 ? Promise.reject(new Error('two')) : sleep(1)), 3);
    expect((await answers.next()).value?.[0]).toBe(1);
    await expect(answers.next()).rejects.toThrow('two');
  });

  it('ends at once without items', async () => {
    expect(await collect(lookAhead([], () => Promise.resolve(1), 4))).toEqual([]);
  });
});

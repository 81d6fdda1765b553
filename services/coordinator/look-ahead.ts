/**
 * Asks about every item, some ahead of the reader, and yields the answers in the order of the items: a store that
 * answers slowly is asked many things at a time.
 *
 * @param width questions on the way at a time
 */
export async function* lookAhead<T, A>(
  items: Iterable<T>,
  ask: (item: T) => Promise<A>,
  width: number,
): AsyncGenerator<readonly [item: T, answer: A]> {
  const source = items[Symbol.iterator]();
  const asked: { readonly item: T; readonly answer: Promise<A> }[] = [];
  while (true) {
    while (asked.length < width) {
      const next = source.next();
      if (next.done) break;
      const answer = ask(next.value);
      // A failure is thrown where the answer is read; until then it must not count as unheard.
      answer.catch(() => {});
      asked.push({ item: next.value, answer });
    }
    const first = asked.shift();
    if (!first) return;
    yield [first.item, await first.answer];
  }
}

/** Any iterable as an async generator. */
export async function* toAsync<T>(items: Iterable<T> | AsyncIterable<T>): AsyncGenerator<T> {
  yield* items;
}

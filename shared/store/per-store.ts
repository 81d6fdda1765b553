import { openStore } from './open-store.ts';
import type { Store } from './store.ts';

/** The contexts of the stores that a thread works for; the least recently used is let go. */
export class PerStore<T> {
  readonly #make: (store: Store) => T;
  readonly #release: (context: T) => void;
  readonly #limit: number;
  readonly #contexts = new Map<string, T>();

  /** @param release called for a context that is let go */
  constructor(make: (store: Store) => T, release: (context: T) => void = () => {}, limit = 4) {
    this.#make = make;
    this.#release = release;
    this.#limit = limit;
  }

  of(location: string): T {
    const context = this.#contexts.get(location) ?? this.#make(openStore(location));
    this.#contexts.delete(location);
    this.#contexts.set(location, context);
    if (this.#contexts.size > this.#limit) {
      const [[oldest, stale]] = this.#contexts;
      this.#contexts.delete(oldest);
      this.#release(stale);
    }
    return context;
  }
}

import { afterAll, afterEach, beforeAll } from 'vitest';
import type { DemoSize } from '../../infra/demo/options.ts';
import { QueueBasin } from './queue-basin.ts';
import { startRedis, type TestRedis } from './redis.ts';
import { Topology } from './topology.ts';

/** A basin, a Redis and services for the tests of one file; valid while its tests run. */
export class QueueFixture {
  #basin: QueueBasin | undefined;
  #redis: TestRedis | undefined;
  #topology: Topology | undefined;

  private constructor(size: DemoSize) {
    beforeAll(async () => {
      this.#redis = await startRedis();
      this.#basin = await QueueBasin.make(size);
    });
    afterEach(() => this.#topology?.stop());
    afterAll(async () => {
      await this.#redis?.stop();
      await this.#basin?.remove();
    });
  }

  /** To be called once at the top of a test file. */
  static of(size: DemoSize): QueueFixture {
    return new QueueFixture(size);
  }

  get basin(): QueueBasin {
    return this.#basin as QueueBasin;
  }

  get redis(): TestRedis {
    return this.#redis as TestRedis;
  }

  /** Services of a test, none started yet; those of the test before were ended with it. */
  topology(environment: Readonly<Record<string, string>> = {}): Topology {
    this.#topology = new Topology(this.redis.url, environment);
    return this.#topology;
  }

  /** Services of a test: workers and a mosaicker that are ready. */
  async services(workers: number, environment: Readonly<Record<string, string>> = {}): Promise<Topology> {
    const topology = this.topology(environment);
    for (let k = 0; k < workers; k++) topology.start('worker');
    topology.start('mosaicker');
    await topology.ready();
    return topology;
  }
}

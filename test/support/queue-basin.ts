import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { expect } from 'vitest';
import type { DemoSize } from '../../infra/demo/options.ts';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { filesBelow, hashesBelow } from './products.ts';
import { type CliResult, runCli, startCli, temporaryFolder } from './run-cli.ts';

const isPublished = (path: string) => /^(products|tables)\/|^report\.html$/.test(path);

/** An invented basin in a folder of its own, with what the embedded engine makes of it. */
export class QueueBasin {
  readonly folder: string;
  readonly remove: () => Promise<void>;
  #expected: Readonly<Record<string, string>> = {};
  /** Artefacts of a whole run. */
  artefactCount = 0;

  private constructor(folder: string, remove: () => Promise<void>) {
    this.folder = folder;
    this.remove = remove;
  }

  static async make(size: DemoSize): Promise<QueueBasin> {
    const made = new QueueBasin(...(await temporaryFolder()));
    await writeDemo(made.folder, { seed: 12, size });
    const { exitCode, stderr } = await runCli(...made.arguments('embedded'));
    expect(exitCode, stderr).toBe(0);
    made.#expected = await hashesBelow(made.out('embedded'), isPublished);
    expect(Object.keys(made.#expected).length).toBeGreaterThan(20);
    made.artefactCount = await made.artefacts('embedded');
    return made;
  }

  get basinFile(): string {
    return join(this.folder, 'basin.yaml');
  }

  out(name: string): string {
    return join(this.folder, name);
  }

  arguments(name: string, ...more: readonly string[]): string[] {
    return ['run', this.basinFile, '--out', this.out(name), '--set', 'grid.tile=128', ...more];
  }

  start(name: string, redisUrl: string, ...more: readonly string[]): ReturnType<typeof startCli> {
    return startCli(this.arguments(name, '--set', `engine=${redisUrl}`, ...more));
  }

  run(name: string, redisUrl: string, ...more: readonly string[]): Promise<CliResult> {
    return this.start(name, redisUrl, ...more).ended;
  }

  /** Files that a run has left among its artefacts so far: how far it is, told without a clock. */
  artefacts(name: string): Promise<number> {
    return filesBelow(join(this.out(name), 'artefacts'), (path) => !path.includes('.part-')).then(
      (all) => all.length,
      () => 0,
    );
  }

  /** Waits until a run has done a share of its work, or `until` says that there is nothing to wait for. */
  async reached(name: string, share: number, until: () => boolean = () => false): Promise<void> {
    while (!until() && (await this.artefacts(name)) < this.artefactCount * share) await sleep(10);
  }

  /** Products, tables and report are those of the embedded engine, and nothing half-written is left. */
  async expectSame(name: string): Promise<void> {
    expect(await hashesBelow(this.out(name), isPublished)).toEqual(this.#expected);
    expect(await filesBelow(this.out(name), (path) => path.includes('.part-'))).toEqual([]);
  }
}

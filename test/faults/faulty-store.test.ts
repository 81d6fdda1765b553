import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeDemo } from '../../infra/demo/write-demo.ts';
import { LocalStore } from '../../shared/store/local-store.ts';
import { S3Store } from '../../shared/store/s3-store.ts';
import { type FaultProxy, startFaultProxy } from '../support/fault-proxy.ts';
import { runCli, startCli, temporaryFolder } from '../support/run-cli.ts';
import { accessTo } from '../support/s3-access.ts';
import { BUCKET, CREDENTIALS, type S3Server, startS3Server } from '../support/s3-server.ts';

/** One request in so many fails. */
const EVERY = 20;
const LOCATION = `s3://${BUCKET}/orrin/2025`;

let folder: string;
let remove: () => Promise<void>;
let server: S3Server;
let proxy: FaultProxy;
const basinFile = () => join(folder, 'basin.yaml');
const runArguments = (out: string) => ['run', basinFile(), '--out', out, '--set', 'grid.tile=128', '--threads', '2'];
const environment = () => ({
  AWS_ENDPOINT_URL_S3: proxy.url,
  AWS_ACCESS_KEY_ID: CREDENTIALS.accessKeyId,
  AWS_SECRET_ACCESS_KEY: CREDENTIALS.secretAccessKey,
});

beforeAll(async () => {
  [folder, remove] = await temporaryFolder();
  await writeDemo(folder, { seed: 12, size: 'tiny' });
  server = await startS3Server();
  proxy = await startFaultProxy(server.url, EVERY);
  const { exitCode, stderr } = await runCli(...runArguments(join(folder, 'local')));
  expect(exitCode, stderr).toBe(0);
});
afterAll(async () => {
  await proxy.close();
  await server.close();
  await remove();
});

/** What a run published, read past the proxy. */
async function publishedBelow(place: string): Promise<Map<string, Buffer>> {
  const store = place === LOCATION ? new S3Store(place, accessTo(server.url)) : new LocalStore(place);
  const keys = (await store.list('')).filter((key) => /^(products|tables)\/|^report\.html$/.test(key));
  return new Map(await Promise.all(keys.map(async (key) => [key, Buffer.from((await store.get(key)) ?? [])] as const)));
}

/**
 * A STAC item with the links to its scenes as paths: a folder's are relative, and from object storage no relative
 * path leads to a file.
 */
function withScenePaths(item: Buffer, folderOfItem: string): unknown {
  const parsed = JSON.parse(item.toString('utf8')) as { links: { rel: string; href: string }[] };
  const links = parsed.links.map((link) => {
    if (link.rel !== 'derived_from') return link;
    const path = link.href.startsWith('file:') ? fileURLToPath(link.href) : join(folderOfItem, link.href);
    return { ...link, href: path };
  });
  expect(links.filter(({ rel }) => rel === 'derived_from').length).toBeGreaterThan(0);
  return { ...parsed, links };
}

describe('a run into object storage that fails now and then', () => {
  it('ends with the files of a run into a folder, and leaves no lock and no upload', async () => {
    const { exitCode, stdout, stderr } = await startCli(runArguments(LOCATION), environment()).ended;
    const faults = Object.values(proxy.failed);
    console.log(
      `${proxy.requests} requests, ${faults.reduce((a, b) => a + b)} failed: ${JSON.stringify(proxy.failed)}`,
    );
    expect(exitCode, stderr).toBe(0);
    expect(stdout).toBe(`${LOCATION}/report.html\n`);
    expect(Math.min(...faults)).toBeGreaterThan(0);
    const [stored, local] = [await publishedBelow(LOCATION), await publishedBelow(join(folder, 'local'))];
    expect([...stored.keys()]).toEqual([...local.keys()]);
    for (const [key, bytes] of stored) {
      const expected = local.get(key) ?? Buffer.alloc(0);
      if (key.endsWith('/item.json')) {
        const folderOfItem = join(folder, 'local', dirname(key));
        expect(withScenePaths(bytes, folderOfItem), key).toEqual(withScenePaths(expected, folderOfItem));
      } else {
        expect(bytes.equals(expected), `${key} differs`).toBe(true);
      }
    }
    expect(await server.uploads()).toEqual([]);
    expect(await new S3Store(LOCATION, accessTo(server.url)).has('.lock')).toBe(false);
  });

  it('is read by status', async () => {
    const { exitCode, stdout } = await startCli(['status', LOCATION, '--json'], environment()).ended;
    expect(exitCode).toBe(0);
    const record = JSON.parse(stdout);
    expect(record).toMatchObject({ state: 'complete', leftOut: 0 });
    expect(record.stages.flux.done).toBe(record.stages.flux.total);
    const plain = await startCli(['status', LOCATION], environment()).ended;
    expect(plain.stdout).toContain(`run      ${record.id}`);
    const nowhere = await startCli(['status', `s3://${BUCKET}/nowhere`], environment()).ended;
    expect(nowhere.exitCode).toBe(66);
  });

  it('keeps what is done: a second run does no tile', async () => {
    const { exitCode, stderr } = await startCli(runArguments(LOCATION), environment()).ended;
    expect(exitCode, stderr).toBe(0);
    const { stdout } = await startCli(['status', LOCATION, '--json'], environment()).ended;
    const { stages } = JSON.parse(stdout);
    for (const stage of ['terrain', 'prepare', 'flux', 'day', 'integrate', 'tally', 'mosaic']) {
      expect(stages[stage], stage).toMatchObject({ done: 0, setAside: 0, kept: stages[stage].total });
    }
  });

  it('says at once that the bucket is missing', async () => {
    const { exitCode, stderr } = await startCli(runArguments('s3://no-such-bucket/x'), environment()).ended;
    expect(exitCode).toBe(78);
    expect(stderr).toMatch(/s3:\/\/no-such-bucket: there is no such bucket.*\n.*Create the bucket/);
  });
});

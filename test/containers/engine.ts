import { spawnSync } from 'node:child_process';
import { type ContainerRuntimeClient, getContainerRuntimeClient } from 'testcontainers';

/** What the tests have to work with. */
export interface ContainerEngine {
  readonly client: ContainerRuntimeClient;
  /** True where Compose is a command of its own, docker-compose, and not one of docker. */
  readonly standalone: boolean;
}

/** The Docker engine of this machine, or the reason why there is nothing to test with. */
export async function findEngine(): Promise<ContainerEngine | string> {
  const { getuid } = process;
  if (!getuid) return 'the containers write as user 1000, which this system does not know';
  if (![0, 1000].includes(getuid())) return 'the containers write as user 1000: run the tests as that user or as root';
  const client = await getContainerRuntimeClient().catch(() => undefined);
  if (!client) return 'no Docker engine answers';
  const answers = (...command: string[]) => spawnSync(command[0], command.slice(1)).status === 0;
  if (answers('docker', 'compose', 'version')) return { client, standalone: false };
  if (answers('docker-compose', 'version')) return { client, standalone: true };
  return 'neither "docker compose" nor "docker-compose" is installed';
}

/** Images that `infra/images/make-base.sh` made, as variables of docker-compose.yml; none where it was not run. */
export async function localImages({ client }: ContainerEngine): Promise<Readonly<Record<string, string>>> {
  const local = {
    BASINLOOM_BASE: 'basinloom-local-base:bookworm',
    BASINLOOM_BUILD_BASE: 'basinloom-local-build:bookworm',
    BASINLOOM_REDIS_IMAGE: 'basinloom-local-redis:bookworm',
  };
  const { dockerode } = client.container;
  const found = await Promise.all(
    Object.values(local).map((image) =>
      dockerode
        .getImage(image)
        .inspect()
        .then(
          () => true,
          () => false,
        ),
    ),
  );
  return found.every(Boolean) ? local : {};
}

import { randomBytes } from 'node:crypto';
import { fileURLToPath } from 'node:url';
import {
  type ContainerRuntimeClient,
  DockerComposeEnvironment,
  type StartedDockerComposeEnvironment,
  Wait,
} from 'testcontainers';
import { type ContainerEngine, localImages } from './engine.ts';

type Container = ReturnType<ContainerRuntimeClient['container']['getById']>;

/** One container of the services. */
export interface ServiceContainer {
  readonly service: string;
  /** SIGKILL, as by an engine that is out of memory. */
  kill(): Promise<void>;
  /** SIGTERM, and SIGKILL when the grace of the compose file is over. @returns the exit code; 137 for killed */
  stop(): Promise<number>;
  start(): Promise<void>;
  state(): Promise<{ readonly running: boolean; readonly exitCode: number }>;
  /** Whole log so far. */
  log(): Promise<string>;
  run(...command: readonly string[]): Promise<{ readonly exitCode: number; readonly output: string }>;
  inspect(): ReturnType<Container['inspect']>;
}

/** The services of docker-compose.yml, built from this checkout, healthy. */
export class ComposeServices {
  readonly token: string;
  readonly #engine: ContainerEngine;
  readonly #project: string;
  readonly #environment: StartedDockerComposeEnvironment;

  private constructor(
    engine: ContainerEngine,
    token: string,
    project: string,
    environment: StartedDockerComposeEnvironment,
  ) {
    this.#engine = engine;
    this.token = token;
    this.#project = project;
    this.#environment = environment;
  }

  /** @param data folder that the containers see as /data; user 1000 must be able to write to it */
  static async up(engine: ContainerEngine, data: string): Promise<ComposeServices> {
    const token = randomBytes(24).toString('hex');
    const project = `basinloom-test-${randomBytes(4).toString('hex')}`;
    const environment = new DockerComposeEnvironment(
      fileURLToPath(new URL('../..', import.meta.url)),
      'docker-compose.yml',
    )
      .withProjectName(project)
      .withBuild()
      // The reaper is an image of its own, which a machine without a registry does not have: `down` cleans up.
      .withAutoCleanup(false)
      .withEnvironment({
        ...(await localImages(engine)),
        BASINLOOM_TAG: 'test',
        BASINLOOM_TOKEN: token,
        BASINLOOM_DATA: data,
        // Any free port.
        BASINLOOM_PORT: '0',
        BASINLOOM_LOCK_SECONDS: '3',
      })
      .withDefaultWaitStrategy(Wait.forHealthCheck())
      .withStartupTimeout(180_000);
    if (engine.standalone) environment.withClientOptions({ executable: { standalone: true } });
    return new ComposeServices(engine, token, project, await environment.up());
  }

  /** Containers of a service, or of all, by number. */
  async containers(service?: string): Promise<ServiceContainer[]> {
    const { dockerode } = this.#engine.client.container;
    const label = [`com.docker.compose.project=${this.#project}`];
    if (service) label.push(`com.docker.compose.service=${service}`);
    const list = await dockerode.listContainers({ all: true, filters: { label } });
    const number = (one: (typeof list)[number]) => Number(one.Labels['com.docker.compose.container-number']);
    return list
      .sort((a, b) => number(a) - number(b))
      .map(({ Id, Labels }) => this.#container(dockerode.getContainer(Id), Labels['com.docker.compose.service']));
  }

  /** Where the API answers on this machine. @throws Error while the coordinator does not run */
  async url(): Promise<string> {
    const [coordinator] = await this.containers('coordinator');
    const [binding] = (await coordinator.inspect()).NetworkSettings.Ports['8080/tcp'] ?? [];
    if (!binding) throw new Error('the coordinator has no port');
    return `http://127.0.0.1:${binding.HostPort}`;
  }

  async down(): Promise<void> {
    await this.#environment.down({ removeVolumes: true });
  }

  #container(container: Container, service: string): ServiceContainer {
    const { client } = this.#engine;
    const state = async () => {
      const { Running: running, ExitCode: exitCode } = (await container.inspect()).State;
      return { running, exitCode };
    };
    return {
      service,
      state,
      kill: async () => {
        await container.kill({ signal: 'SIGKILL' });
        await container.wait();
      },
      stop: async () => {
        // Without a time of its own, the engine takes the grace that the compose file gave the container.
        await container.stop();
        return (await state()).exitCode;
      },
      start: async () => {
        await container.start();
      },
      log: async () => (await container.logs({ stdout: true, stderr: true })).toString('utf8'),
      run: (...command) => client.container.exec(container, [...command]),
      inspect: () => container.inspect(),
    };
  }
}

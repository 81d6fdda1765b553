import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';

export type Role = 'coordinator' | 'worker' | 'mosaicker';

/** One line of a service's log. */
export type LogLine = Readonly<Record<string, unknown>> & { readonly msg: string };

export interface ServiceOptions {
  readonly environment: Readonly<Record<string, string>>;
  /** File to start instead of the service's own main.ts. */
  readonly main?: string;
}

/** A service in a process of its own, with its log. */
export class ServiceProcess {
  readonly role: Role;
  readonly lines: LogLine[] = [];
  readonly ended: Promise<number | NodeJS.Signals>;
  readonly #child: ChildProcess;
  #waiting: { readonly wanted: (line: LogLine) => boolean; readonly found: (line: LogLine) => void }[] = [];
  #stderr = '';

  constructor(role: Role, { environment, main }: ServiceOptions) {
    this.role = role;
    const file = main ?? fileURLToPath(new URL(`../../services/${role}/main.ts`, import.meta.url));
    const child = spawn(process.execPath, [file], {
      env: { ...process.env, BASINLOOM_HEALTH_PORT: '0', BASINLOOM_LOG_LEVEL: 'debug', ...environment },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    this.#child = child;
    child.stderr.on('data', (chunk) => {
      this.#stderr += chunk;
    });
    createInterface({ input: child.stdout }).on('line', (text) => this.#line(text));
    this.ended = once(child, 'close').then(([code, signal]) => (code ?? signal) as number | NodeJS.Signals);
  }

  get pid(): number {
    return this.#child.pid as number;
  }

  get isRunning(): boolean {
    return this.#child.exitCode === null && this.#child.signalCode === null;
  }

  /** The first line of the log, past or to come, that is wanted. */
  async line(wanted: (line: LogLine) => boolean): Promise<LogLine> {
    const known = this.lines.find(wanted);
    if (known) return known;
    const found = new Promise<LogLine>((resolve) => this.#waiting.push({ wanted, found: resolve }));
    const over = this.ended.then((how) => {
      throw new Error(`${this.role} ended (${how}) without the line that was waited for\n${this.#stderr}`);
    });
    return Promise.race([found, over]);
  }

  async ready(): Promise<this> {
    await this.line(({ msg }) => msg === 'ready');
    return this;
  }

  signal(name: NodeJS.Signals): void {
    this.#child.kill(name);
  }

  async kill(): Promise<void> {
    this.#child.kill('SIGKILL');
    await this.ended;
  }

  async stop(): Promise<number | NodeJS.Signals> {
    this.#child.kill('SIGTERM');
    return this.ended;
  }

  #line(text: string): void {
    if (!text.startsWith('{')) return;
    const line = JSON.parse(text) as LogLine;
    this.lines.push(line);
    this.#waiting = this.#waiting.filter(({ wanted, found }) => {
      if (!wanted(line)) return true;
      found(line);
      return false;
    });
  }
}

/** Services on one Redis; whatever was started is ended by `stop`. */
export class Topology {
  readonly #environment: Readonly<Record<string, string>>;
  readonly all: ServiceProcess[] = [];

  constructor(redisUrl: string, environment: Readonly<Record<string, string>> = {}) {
    this.#environment = { BASINLOOM_REDIS_URL: redisUrl, BASINLOOM_LOCK_SECONDS: '1', ...environment };
  }

  start(role: Role, environment: Readonly<Record<string, string>> = {}, main?: string): ServiceProcess {
    const started = new ServiceProcess(role, {
      environment: { BASINLOOM_THREADS: '1', ...this.#environment, ...environment },
      ...(main !== undefined && { main }),
    });
    this.all.push(started);
    return started;
  }

  async ready(): Promise<void> {
    await Promise.all(this.all.filter(({ isRunning }) => isRunning).map((service) => service.ready()));
  }

  /** Log lines of every process, living and dead. */
  lines(wanted: (line: LogLine) => boolean): LogLine[] {
    return this.all.flatMap(({ lines }) => lines.filter(wanted));
  }

  async stop(): Promise<void> {
    await Promise.all(this.all.filter(({ isRunning }) => isRunning).map((service) => service.kill()));
  }
}

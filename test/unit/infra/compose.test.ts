import { describe, expect, it } from 'vitest';
import { readEnvironment } from '../../../shared/service/environment.ts';
import { SOFTWARE } from '../../../shared/service/software.ts';
import { SERVICE_VARIABLES, type ServiceProcess } from '../../../shared/service/variables.ts';
import { bytes, composeFile, composeSeconds, dockerfile, redisDirectives, type Yaml } from '../../support/manifests.ts';

const TOKEN = 'a-token-of-sixteen';
const { services, networks, volumes } = composeFile({ BASINLOOM_TOKEN: TOKEN });
const NAMES = Object.keys(SERVICE_VARIABLES) as ServiceProcess[];
const last = (instruction: string) => dockerfile().findLast((line) => line.startsWith(`${instruction} `));
/** What the image itself sets. */
const imageVariables: Record<string, string> = Object.fromEntries(
  [...last('ENV')!.matchAll(/(\w+)=(\S+)/g)].map(([, name, value]) => [name, value]),
);

describe('docker-compose.yml', () => {
  it('needs a token', () => {
    expect(() => composeFile()).toThrow('BASINLOOM_TOKEN: set BASINLOOM_TOKEN');
  });

  it('has Redis and every service', () => {
    expect(Object.keys(services).sort()).toEqual(['redis', ...NAMES].sort());
    expect(services.worker.scale).toBe(2);
  });

  it.each(Object.entries<Yaml>(services))('fences %s in', (_, service) => {
    expect(service).toMatchObject({
      init: true,
      restart: 'unless-stopped',
      read_only: true,
      cap_drop: ['ALL'],
      security_opt: ['no-new-privileges:true'],
      healthcheck: { interval: expect.any(String), timeout: expect.any(String), retries: expect.any(Number) },
    });
    expect(service.healthcheck.test[0]).toBe('CMD');
    expect(bytes(service.mem_limit)).toBeGreaterThan(0);
    expect(service.cpus).toBeGreaterThan(0);
    expect(service.pids_limit).toBeGreaterThan(0);
    expect(service.image).toMatch(/:(?!latest$)[\w.-]+$/);
  });

  it.each(NAMES)('gives %s the one image, its main file and variables that it reads', (name) => {
    const service = services[name];
    expect(service.image).toBe(`basinloom:${SOFTWARE.version}`);
    expect(service.command).toEqual([`services/${name}/main.ts`]);
    expect(service.depends_on).toEqual({ redis: { condition: 'service_healthy' } });
    expect(service.volumes).toContain('./data:/data');
    // Those of object storage are passed on as they are; the rest must be known.
    const passed = Object.keys(service.environment).filter((key) => service.environment[key] !== null);
    expect(Object.keys(SERVICE_VARIABLES[name])).toEqual(expect.arrayContaining(passed));
    const given = Object.fromEntries(
      Object.entries({ ...imageVariables, ...service.environment }).map(([key, value]) => [key, String(value ?? '')]),
    );
    const environment = readEnvironment(SERVICE_VARIABLES[name], given);
    expect(composeSeconds(service.stop_grace_period)).toBeGreaterThan(environment.BASINLOOM_STOP_SECONDS + 5);
    expect(environment.BASINLOOM_REDIS_URL).toBe('redis://redis:6379');
    if ('BASINLOOM_THREADS' in environment) expect(environment.BASINLOOM_THREADS).toBe(service.cpus);
  });

  it('publishes the API alone, to this machine alone', () => {
    const published = Object.entries<Yaml>(services).flatMap(([name, { ports = [] }]) =>
      ports.map((port: string) => `${name} ${port}`),
    );
    expect(published).toEqual(['coordinator 127.0.0.1:8080:8080']);
    expect(services.coordinator.environment).toMatchObject({ BASINLOOM_HTTP_PORT: '8080', BASINLOOM_TOKEN: TOKEN });
  });

  it('keeps Redis where only the services reach it, on its own disk and within its memory', () => {
    const { redis } = services;
    expect(redis.networks).toEqual(['queue']);
    expect(networks.queue).toEqual({ internal: true });
    expect(redis.command).toEqual(['redis-server', '/etc/basinloom/redis.conf']);
    expect(redis.volumes).toEqual(['./infra/redis.conf:/etc/basinloom/redis.conf:ro', 'redis:/data']);
    expect(Object.keys(volumes)).toContain('redis');
    const directives = redisDirectives();
    expect(Object.fromEntries(directives)).toMatchObject({ appendonly: 'yes', 'maxmemory-policy': 'noeviction' });
    expect(directives.get('dir')).toBe('/data');
    expect(bytes(redis.mem_limit)).toBeGreaterThanOrEqual(2 * bytes(directives.get('maxmemory')!));
  });
});

describe('infra/Dockerfile', () => {
  it('ends in an image of no root, with its version, stop signal and health check', () => {
    expect(last('USER')).toBe('USER 1000:1000');
    expect(last('STOPSIGNAL')).toBe('STOPSIGNAL SIGTERM');
    expect(last('HEALTHCHECK')).toContain('CMD ["node", "infra/health-check.ts"]');
    expect(dockerfile()).toContain(`ARG VERSION=${SOFTWARE.version}`);
    expect(imageVariables).toMatchObject({ BASINLOOM_HEALTH_HOST: '0.0.0.0', BASINLOOM_HEALTH_PORT: '9100' });
  });

  it('starts no shell', () => {
    const commands = dockerfile().filter((line) => /^(RUN|CMD|ENTRYPOINT) /.test(line));
    expect(commands.length).toBeGreaterThan(3);
    for (const command of commands) expect(command).toMatch(/^\w+ \[".*"\]$/);
  });

  it('leaves packages of development and their scripts out', () => {
    const installs = dockerfile().filter((line) => line.includes('"ci"'));
    expect(installs.at(-1)).toContain('--omit=dev');
    for (const install of installs) expect(install).toContain('--ignore-scripts');
  });
});

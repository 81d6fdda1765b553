import { readdirSync, readFileSync } from 'node:fs';
import { parse, parseAllDocuments } from 'yaml';

const at = (path: string) => new URL(`../../${path}`, import.meta.url);
const read = (path: string) => readFileSync(at(path), 'utf8');

// The files are YAML of other programs; the tests below say what they look for in it.
// biome-ignore lint/suspicious/noExplicitAny: documents of any shape
export type Yaml = any;

/** Documents of infra/kubernetes, with the file each stands in. */
export function manifests(): { readonly file: string; readonly document: Yaml }[] {
  return readdirSync(at('infra/kubernetes'))
    .filter((file) => file.endsWith('.yaml'))
    .flatMap((file) =>
      parseAllDocuments(read(`infra/kubernetes/${file}`)).map((parsed) => {
        if (parsed.errors.length > 0) throw new Error(`${file}: ${parsed.errors[0].message}`);
        return { file, document: parsed.toJS() as Yaml };
      }),
    );
}

/** docker-compose.yml with its defaults, as `docker compose config` would show it. Variables without one are as given. */
export function composeFile(given: Readonly<Record<string, string>> = {}): Yaml {
  const text = read('docker-compose.yml').replaceAll(/\$\{(\w+)(?::([-?])([^}]*))?\}/g, (_, name, kind, rest) => {
    const value = given[name] || (kind === '-' ? rest : undefined);
    if (value === undefined) throw new Error(`${name}: ${rest ?? 'not set'}`);
    return value;
  });
  return parse(text, { merge: true });
}

/** Directives of a redis.conf, without comments. */
export function redisDirectives(text = read('infra/redis.conf')): Map<string, string> {
  const lines = text.split('\n').map((line) => line.trim());
  return new Map(
    lines
      .filter((line) => line !== '' && !line.startsWith('#'))
      .map((line) => [line.slice(0, line.indexOf(' ')), line.slice(line.indexOf(' ') + 1)]),
  );
}

/** Instructions of infra/Dockerfile, one each, in order. */
export function dockerfile(): string[] {
  return read('infra/Dockerfile')
    .replaceAll(/^#.*\n/gm, '')
    .replaceAll(/\\\n\s*/g, ' ')
    .split('\n')
    .filter((line) => line.trim() !== '');
}

/** Seconds of a duration of a compose file. */
export function composeSeconds(text: string): number {
  const [, number, unit] = /^(\d+)(s|m)$/.exec(text) ?? [];
  if (!number) throw new Error(`"${text}" is no duration`);
  return Number(number) * (unit === 'm' ? 60 : 1);
}

/** Bytes of a memory size, 512m and 4g as in compose files and redis.conf, 512Mi and 4Gi as in Kubernetes. */
export function bytes(text: string): number {
  const [, number, unit] = /^(\d+)(m|mb|g|gb|Mi|Gi)$/.exec(text) ?? [];
  if (!number) throw new Error(`"${text}" is no size`);
  return Number(number) * (unit.toLowerCase().startsWith('m') ? 2 ** 20 : 2 ** 30);
}

import { lstat, realpath } from 'node:fs/promises';
import { basename, dirname, isAbsolute, join, resolve, sep } from 'node:path';
import type { BasinFile } from '../../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { isUrl, loadBasin } from '../load-basin.ts';
import type { RunRequest } from '../runs.ts';

export interface AllowedOptions {
  /** Absolute folders. */
  readonly roots: readonly string[];
  /** How the URLs begin that may be named: `https://host/folder`, `s3://bucket/prefix`. */
  readonly urls: readonly string[];
}

/**
 * Which places of the machine and the network a request may name. A basin file reads and writes whatever it
 * names, with the rights of the services; over the network that must not be everything.
 */
export class AllowedPlaces {
  readonly #roots: readonly string[];
  readonly #urls: readonly URL[];

  /** @throws BasinloomError ENVIRONMENT for a root that is not absolute or a URL that is none */
  constructor({ roots, urls }: AllowedOptions) {
    const relative = roots.find((root) => !isAbsolute(root));
    if (relative !== undefined) wrong('BASINLOOM_ROOTS', `${relative} is not an absolute path`);
    this.#roots = roots.map((root) => resolve(root));
    this.#urls = urls.map(
      (text) => prefixOf(text) ?? wrong('BASINLOOM_URLS', `${text} is not the beginning of a plain URL`),
    );
  }

  /**
   * Checks every place that a run of the request would read or write.
   *
   * @returns the request with its paths as they were checked: absolute, without `..`
   * @throws BasinloomError PATH_OUTSIDE, URL_OUTSIDE, and those of loadBasin
   */
  async request({ basinFile, out, set }: RunRequest): Promise<RunRequest> {
    const checked: RunRequest = {
      // Before the file is read: what stands in a file outside must not show in a message.
      basinFile: await this.place('basinFile', basinFile),
      ...(set && { set }),
      ...(out !== undefined && { out: await this.place('out', out) }),
    };
    const basin = await loadBasin(checked.basinFile, checked);
    for (const [key, place] of placesOf(basin)) await this.place(key, place);
    return checked;
  }

  /**
   * Checks one path or URL.
   *
   * @param key what it is, for the message
   * @returns the URL as it is, or the path as it was checked
   * @throws BasinloomError PATH_OUTSIDE, URL_OUTSIDE
   */
  async place(key: string, place: string): Promise<string> {
    if (isUrl(place)) {
      const url = plainUrl(place);
      if (url && this.#urls.some((prefix) => isUrlBelow(prefix, url))) return place;
      throw new BasinloomError('URL_OUTSIDE', { key, url: printable(place) });
    }
    const path = resolve(place);
    if (!place.includes('\0') && (await this.#isInside(path))) return path;
    throw new BasinloomError('PATH_OUTSIDE', { key, path: place.replaceAll('\0', '\\0') });
  }

  async #isInside(path: string): Promise<boolean> {
    const target = await targetOf(path);
    if (target === null) return false;
    for (const root of this.#roots) {
      // Every time anew: a root may be a link, and may be mounted late.
      const real = await realpath(root).catch(() => null);
      if (real !== null && isPathBelow(real, target)) return true;
    }
    return false;
  }
}

/** Every place that a loaded basin names, with its key. */
export function placesOf({ region, scenes, weather, terrain, landcover, store }: BasinFile): [string, string][] {
  const places: [string, string | undefined][] = [
    ['region.boundary', region.boundary],
    ['region.zones', region.zones],
    ...scenes.map(({ path }, index): [string, string] => [`scenes.${index}.path`, path]),
    ...weather.map(({ path }, index): [string, string] => [`weather.${index}.path`, path]),
    ['terrain', terrain],
    ['landcover.path', landcover?.path],
    ['landcover.classes', landcover?.classes],
    ['store', store],
  ];
  return places.filter((place): place is [string, string] => place[1] !== undefined);
}

/** True for the folder itself and what lies below it. Both absolute, without `..` and links. */
export function isPathBelow(folder: string, path: string): boolean {
  return path === folder || path.startsWith(folder.endsWith(sep) ? folder : folder + sep);
}

/**
 * Where a path leads when all links in it are followed; what does not exist yet is taken as written.
 *
 * @returns null where that cannot be told: no permission, a ring of links, a link whose target is missing (writing
 *   to it would make the target, wherever that is)
 */
async function targetOf(path: string): Promise<string | null> {
  const missing: string[] = [];
  for (let at = path; ; at = dirname(at)) {
    try {
      return join(await realpath(at), ...missing);
    } catch (error) {
      const { code } = error as NodeJS.ErrnoException;
      if (code !== 'ENOENT' && code !== 'ENOTDIR') return null;
    }
    const isDangling = await lstat(at).then(
      () => true,
      () => false,
    );
    if (isDangling || dirname(at) === at) return null;
    missing.unshift(basename(at));
  }
}

/** True for a URL of the prefix's scheme, host and port whose path is that of the prefix or below it. */
export function isUrlBelow(prefix: URL, url: URL): boolean {
  const folder = prefix.pathname.replace(/\/+$/, '');
  const isSameHost = url.protocol === prefix.protocol && url.host === prefix.host;
  return isSameHost && (url.pathname === folder || url.pathname.startsWith(`${folder}/`));
}

/**
 * A URL that everybody reads the same way, or null: no user or password, no fragment, no `..`, backslash, blank or
 * control character, and none of these (or a slash) percent-encoded, since some decode before they resolve.
 */
export function plainUrl(text: string): URL | null {
  // biome-ignore lint/suspicious/noControlCharactersInRegex: these are what it looks for
  if (!isUrl(text) || /[\s\\#\u0000-\u0020\u007f]|%(?:[01][0-9a-f]|20|25|2e|2f|5c|7f)/i.test(text)) return null;
  const path = text.replace(/^[^:]+:\/\/[^/?]*/, '').replace(/\?.*$/, '');
  if (path.split('/').some((segment) => segment === '.' || segment === '..')) return null;
  const url = URL.canParse(text) ? new URL(text) : null;
  return url && url.username === '' && url.password === '' && !/^[^/]+:\/\/[^/?]*@/.test(text) ? url : null;
}

function prefixOf(text: string): URL | null {
  const url = plainUrl(text);
  return url?.search === '' && (url.host !== '' || url.protocol === 'file:') ? url : null;
}

/** For a message: without the password that a URL may hold. */
function printable(url: string): string {
  return url.replace(/\/\/[^/?#]*@/, '//...@').replaceAll(/[^\x20-\x7e]/g, '?');
}

function wrong(name: string, detail: string): never {
  throw new BasinloomError('ENVIRONMENT', { name, detail });
}

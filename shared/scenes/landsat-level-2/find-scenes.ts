import { readdir, realpath, stat } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { BasinloomError } from '../../contract/errors.ts';
import type { FoundScene, SceneSource } from '../scene-source.ts';
import { readScene } from './scene.ts';

const MTL_NAME = /^(.+)_MTL\.(json|txt|xml)$/i;
/** Forms of the same metadata, the preferred one first. */
const FORMS = ['json', 'txt', 'xml'];
/** Scenes read at the same time: enough to hide the wait for the disk. */
const AT_ONCE = 4;

/** Landsat Collection 2 Level-2 scenes with surface temperature. */
export const landsatLevel2: SceneSource = { name: 'landsat-level-2', find: findLandsatScenes };

/**
 * Finds all scenes at any depth below a folder by their MTL files, in the order of their paths. Where a scene has its
 * metadata in several forms, JSON goes before text before XML; a damaged form is passed over for the next.
 *
 * @throws BasinloomError SCENES_NONE when the folder itself cannot be read
 */
export async function findLandsatScenes(root: string, signal?: AbortSignal): Promise<FoundScene[]> {
  const candidates = new Map<string, Candidate>();
  const found: FoundScene[] = [];
  for await (const entry of metadataFiles(root, signal)) {
    if ('problem' in entry) found.push(entry);
    else {
      const key = join(entry.folder, entry.id);
      const known = candidates.get(key) ?? { id: entry.id, files: [] };
      candidates.set(key, { id: known.id, files: [...known.files, entry.file] });
    }
  }
  const waiting = [...candidates.values()];
  for (let start = 0; start < waiting.length; start += AT_ONCE) {
    signal?.throwIfAborted();
    found.push(...(await Promise.all(waiting.slice(start, start + AT_ONCE).map((one) => readCandidate(one, signal)))));
  }
  return found;
}

/** One scene: its MTL file in one or more forms. */
interface Candidate {
  readonly id: string;
  readonly files: readonly string[];
}

async function readCandidate({ id, files }: Candidate, signal?: AbortSignal): Promise<FoundScene> {
  const form = (file: string) => FORMS.indexOf(file.slice(file.lastIndexOf('.') + 1).toLowerCase());
  let first: BasinloomError | undefined;
  for (const file of [...files].sort((a, b) => form(a) - form(b))) {
    try {
      return { scene: await readScene(file, signal) };
    } catch (thrown) {
      signal?.throwIfAborted();
      const problem = BasinloomError.from(thrown);
      first ??= problem;
      // Another form cannot mend a missing band.
      if (problem.code !== 'SCENE_METADATA') break;
    }
  }
  return { id, problem: first! };
}

type MetadataFile = { readonly folder: string; readonly id: string; readonly file: string };

/** Walks the folders in the order of their names. A folder that links lead to twice is visited once. */
async function* metadataFiles(
  root: string,
  signal?: AbortSignal,
): AsyncGenerator<MetadataFile | Extract<FoundScene, { problem: unknown }>> {
  const visited = new Set<string>();
  const folders = [root];
  for (let folder = folders.shift(); folder !== undefined; folder = folders.shift()) {
    signal?.throwIfAborted();
    try {
      const place = await realpath(folder);
      if (visited.has(place)) continue;
      visited.add(place);
      const below: string[] = [];
      const entries = await readdir(folder, { withFileTypes: true });
      for (const entry of entries.sort((a, b) => (a.name < b.name ? -1 : 1))) {
        const path = join(folder, entry.name);
        const [, id] = MTL_NAME.exec(entry.name) ?? [];
        if (await isFolder(entry, path)) below.push(path);
        else if (id) yield { folder, id, file: path };
      }
      folders.unshift(...below);
    } catch (cause) {
      signal?.throwIfAborted();
      if (folder === root) throw new BasinloomError('SCENES_NONE', { path: root }, { cause });
      const detail = `cannot be read: ${(cause as Error).message}`;
      const problem = new BasinloomError('SCENE_METADATA', { file: folder, place: 'folder', detail }, { cause });
      yield { id: basename(folder), problem };
    }
  }
}

/** Links are followed; one that leads nowhere is no folder. */
async function isFolder(entry: { isDirectory(): boolean; isSymbolicLink(): boolean }, path: string): Promise<boolean> {
  if (!entry.isSymbolicLink()) return entry.isDirectory();
  return stat(path).then(
    (target) => target.isDirectory(),
    () => false,
  );
}

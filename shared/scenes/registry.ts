import type { SceneRecord } from '../contract/scene.ts';
import { landsatLevel2 } from './landsat-level-2/find-scenes.ts';
import type { SceneSource } from './scene-source.ts';

/** Every scene source of the house by its name in the basin file. */
export const SCENE_SOURCES: Readonly<Record<SceneRecord['source'], SceneSource>> = { 'landsat-level-2': landsatLevel2 };

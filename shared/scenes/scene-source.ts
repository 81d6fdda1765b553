import type { BasinloomError } from '../contract/errors.ts';
import type { SceneRecord } from '../contract/scene.ts';

/** A scene that can be used, or one that cannot, with the reason: a broken scene never stops the survey. */
export type FoundScene =
  | { readonly scene: SceneRecord }
  | {
      /** Name of the scene as far as it is known. */
      readonly id: string;
      readonly problem: BasinloomError;
    };

/** A kind of scene delivery. Each has a folder of its own beside this file. */
export interface SceneSource {
  /** As the basin file names it in scenes[].source. */
  readonly name: SceneRecord['source'];
  /**
   * Finds the scenes below a folder, in a fixed order. Reads metadata and file headers, no pixels.
   *
   * @throws BasinloomError SCENES_NONE when the folder cannot be read at all
   */
  find(root: string, signal?: AbortSignal): Promise<FoundScene[]>;
}

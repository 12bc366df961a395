import type { LoadedRoot } from '../../../core/treatment/find/root-settings.ts';
import { selectSources } from '../../../core/treatment/find/select.ts';
import type { FilePlace } from '../files/place.ts';

/** How many textures of a root globs match. A root is walked once, until its files may have changed. */
export class TextureCounts {
  readonly #paths = new Map<string, Promise<readonly string[]>>();

  async count(place: FilePlace, root: LoadedRoot, hits: (path: string) => boolean): Promise<number> {
    return (await this.#pathsOf(place, root)).filter(hits).length;
  }

  /** Forgets what was walked: files came or went. */
  forget(): void {
    this.#paths.clear();
  }

  #pathsOf(place: FilePlace, root: LoadedRoot): Promise<readonly string[]> {
    const key = JSON.stringify([place.uriOf(root.folder).toString(), root.outFolder, root.settings?.exclude]);
    const known = this.#paths.get(key) ?? walk(place, root);
    this.#paths.set(key, known);
    return known;
  }
}

async function walk({ tree }: FilePlace, { folder }: LoadedRoot): Promise<readonly string[]> {
  const { roots } = await selectSources(tree, { folder, paths: [folder] });
  const own = roots.find((each) => each.folder === folder);
  return own?.textures.map((texture) => texture.path) ?? [];
}

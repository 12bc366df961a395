import type { ImageUse } from '../../manifest/manifest.ts';
import { refuse } from '../../problem.ts';
import type { Extent } from '../../raster/raster.ts';
import { fileNameFault, MAX_NAME_BYTES } from '../paths/file-name.ts';
import { fillPattern, placeholders } from '../paths/pattern.ts';
import type { Treatment } from '../treatment.ts';

/** One output of a texture. A container has neither level nor target. */
export interface OutputRequest {
  readonly use: ImageUse;
  readonly level?: number;
  readonly target?: string;
  /** Of the image; of a container's first level. */
  readonly extent: Extent;
  readonly extension: 'png' | 'ktx2';
}

/** What names follow without a `name` of the settings. */
export const DEFAULT_NAME = '{path}/{name}.{level}.{target}';

/** Path of an output below the output folder: `ground/mud.3.png`, `ground/mud.min.3.png`, `ground/mud.ktx2`,
 *  `ui/icon.2x.png`. A use other than `image` stands behind the name. Throws Refusal `bad-output-name`. */
export function outputPath(texturePath: string, treatment: Pick<Treatment, 'name'>, request: OutputRequest): string {
  const { folder, name } = splitPath(texturePath);
  const pattern = treatment.name ?? DEFAULT_NAME;
  const use = request.use === 'image' ? '' : `.${request.use}`;
  const stem = fillPattern(pattern, {
    path: folder,
    name: `${name}${use}`,
    level: request.level === undefined ? '' : String(request.level),
    width: String(request.extent.width),
    height: String(request.extent.height),
    target: request.target ?? '',
  });
  const placed = use === '' || placeholders(pattern).includes('name') ? stem : `${stem}${use}`;
  return checkedName(`${placed}.${request.extension}`, texturePath);
}

/** Path of a texture's manifest below the output folder: `ground/mud.mips.json`. Throws Refusal `bad-output-name`. */
export function manifestPath(texturePath: string): string {
  const { folder, name } = splitPath(texturePath);
  return checkedName(`${folder === '' ? '' : `${folder}/`}${name}${MANIFEST_ENDING}`, texturePath);
}

export const MANIFEST_ENDING = '.mips.json';

/** A pattern of settings for a file beside the texture, {path} and {name} filled in: root-relative. */
export function sourcePath(pattern: string, texturePath: string): string {
  const { folder, name } = splitPath(texturePath);
  return fillPattern(pattern, { path: folder, name });
}

/** Folder (empty for the root) and file name without its last extension. */
function splitPath(path: string): { readonly folder: string; readonly name: string } {
  const slash = path.lastIndexOf('/');
  const file = path.slice(slash + 1);
  const dot = file.lastIndexOf('.');
  return { folder: path.slice(0, Math.max(0, slash)), name: dot > 0 ? file.slice(0, dot) : file };
}

/** The path, if each of its names can be a name on every system. */
function checkedName(path: string, texturePath: string): string {
  for (const name of path.split('/')) {
    const fault = fileNameFault(name);
    if (fault === null) continue;
    refuse('bad-output-name', { name, reason: reasons[fault] }, { path: texturePath });
  }
  return path;
}

const reasons = {
  empty: 'it is empty',
  device: 'Windows keeps it for a device',
  ending: 'it ends with a dot or a space',
  character: 'it has a control character or one of < > : " | ? * \\',
  length: `it is longer than ${MAX_NAME_BYTES} bytes`,
  segment: 'it names a folder, not a file',
} as const;

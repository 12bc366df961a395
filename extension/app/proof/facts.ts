import * as vscode from 'vscode';
import { type Problem, Refusal } from '../../../core/problem.ts';
import type { BuiltState, PrintHash, SettingsReply } from '../../../core/protocol.ts';
import { sourcePath } from '../../../core/treatment/find/names.ts';
import { resolvePath } from '../../../core/treatment/paths/path.ts';
import { isOnDisk, unsavedSettings } from '../files/place.ts';
import type { Inspection, Platform } from '../platform.ts';
import { matchingRule } from '../settings/open.ts';
import { settingsOf, type TextureSettings } from '../settings/texture.ts';
import type { TextureCounts } from './counts.ts';

/** Bytes of a file that are handed to a page; a copy of them crosses to it. */
const BYTES_LIMIT = 2 ** 29;

/** What the host knows of one texture, asked anew each time. */
export class TextureFacts {
  readonly uri: vscode.Uri;
  readonly #platform: Platform;
  readonly #counts: TextureCounts;
  #roughness: string | null = null;

  constructor(uri: vscode.Uri, platform: Platform, counts: TextureCounts) {
    this.uri = uri;
    this.#platform = platform;
    this.#counts = counts;
  }

  get name(): string {
    return this.uri.path.slice(this.uri.path.lastIndexOf('/') + 1);
  }

  settings(): Promise<TextureSettings> {
    return settingsOf(this.uri, this.#platform);
  }

  async settingsReply(): Promise<SettingsReply> {
    const settings = await this.settings();
    const { root, texture, problems } = settings;
    this.#roughness = roughnessOf(settings)?.toString() ?? null;
    const found = matchingRule(settings);
    const matching =
      found === null
        ? null
        : {
            index: found.index,
            globs: found.rule.match ?? [],
            textures: await this.#counts.count(settings.place, root, (path) => found.rule.hits(path)),
          };
    return {
      file: root.file === null ? null : root.file.slice(root.file.lastIndexOf('/') + 1),
      treatment: texture?.treatment ?? null,
      origins: texture?.origins ?? [],
      problems,
      matching,
    };
  }

  /** What is known of the outputs; null where there is no disk, or the settings are broken. */
  async inspect(): Promise<Inspection | null> {
    if (!isOnDisk(this.uri, this.#platform)) return null;
    const { file } = await this.settings();
    return this.#platform.disk.inspect(file, unsavedSettings());
  }

  async builtState(): Promise<BuiltState> {
    const found = await this.inspect();
    if (found === null) return { kind: 'unknown' };
    const { manifest, reasons } = found;
    if (manifest === null) return { kind: 'not-built' };
    return reasons.length === 0 ? { kind: 'built' } : { kind: 'stale', moved: reasons };
  }

  /** Whether the manifest has this hash for an image; null where it has none. */
  async isBuilt({ use, level, target, pixels }: PrintHash): Promise<boolean | null> {
    const manifest = (await this.inspect())?.manifest ?? null;
    if (manifest === null) return null;
    const found = [...manifest.levels, ...manifest.targets].find(
      (image) => image.use === use && (image.level ?? null) === level && (image.target ?? null) === target,
    );
    return found === undefined ? null : found.pixels === pixels;
  }

  async byteCount(): Promise<number> {
    return (await this.#stat(this.uri)).size;
  }

  /** The file, in a buffer of its own: one that is posted goes with all that lies behind it. */
  bytes(): Promise<ArrayBuffer> {
    return this.#read(this.uri);
  }

  /** Whether a file is the roughness map of the settings as they were last told. */
  isRoughness(uri: vscode.Uri): boolean {
    return uri.toString() === this.#roughness;
  }

  /** The roughness map that the treatment names; null where it names none. */
  async roughness(): Promise<ArrayBuffer | null> {
    const uri = roughnessOf(await this.settings());
    return uri === null ? null : this.#read(uri);
  }

  async #read(uri: vscode.Uri): Promise<ArrayBuffer> {
    const { size } = await this.#stat(uri);
    if (size > BYTES_LIMIT) throw this.#refusal(uri, 'file-too-large', { bytes: size, limit: BYTES_LIMIT });
    const bytes = await this.#attempt(uri, vscode.workspace.fs.readFile(uri));
    return new Uint8Array(bytes).buffer;
  }

  #stat(uri: vscode.Uri): Promise<vscode.FileStat> {
    return this.#attempt(uri, vscode.workspace.fs.stat(uri));
  }

  async #attempt<T>(uri: vscode.Uri, asked: Thenable<T>): Promise<T> {
    try {
      return await asked;
    } catch (error) {
      if (!(error instanceof vscode.FileSystemError)) throw error;
      if (error.code === 'FileNotFound') throw this.#refusal(uri, 'file-gone', {});
      throw this.#refusal(uri, 'source-unreadable', { reason: error.message });
    }
  }

  #refusal(uri: vscode.Uri, code: Problem['code'], values: Problem['values']): Refusal {
    return new Refusal({ code, severity: 'error', values, path: uri.path });
  }
}

function roughnessOf({ texture, root, path, place }: TextureSettings): vscode.Uri | null {
  const roughness = texture?.treatment.normal.roughness ?? null;
  if (roughness === null || !('path' in roughness)) return null;
  return place.uriOf(resolvePath(root.folder, sourcePath(roughness.path, path)));
}

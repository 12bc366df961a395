import * as vscode from 'vscode';
import { type Problem, Refusal } from '../../../core/problem.ts';
import type { BuiltState, SettingsReply } from '../../../core/protocol.ts';
import { sourcePath } from '../../../core/treatment/names.ts';
import { resolvePath } from '../../../core/treatment/path.ts';
import { isOnDisk, unsavedSettings } from '../files/place.ts';
import type { Inspection, Platform } from '../platform.ts';
import { matchingRule } from '../settings/open.ts';
import { settingsOf, type TextureSettings } from '../settings/texture.ts';
import type { TextureCounts } from './counts.ts';

/** Bytes of a file that are handed to a page; a copy of them crosses to it. */
const BYTES_LIMIT = 2 ** 29;

/** One texture that is proofed, however many views show it. */
export class ProofDocument implements vscode.CustomDocument {
  readonly uri: vscode.Uri;
  readonly #platform: Platform;
  readonly #counts: TextureCounts;
  /** Rises with each change of source, settings or outputs. */
  revision = 0;

  constructor(uri: vscode.Uri, platform: Platform, counts: TextureCounts) {
    this.uri = uri;
    this.#platform = platform;
    this.#counts = counts;
  }

  dispose(): void {
    // Nothing is held: bytes go to pages, and pages go with their views.
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
    const images = [...manifest.levels, ...manifest.targets]
      .filter((image) => image.use === 'image')
      .map(({ level, target, pixels }) => ({ level: level ?? null, target: target ?? null, pixels }));
    return reasons.length === 0 ? { kind: 'built', images } : { kind: 'stale', moved: reasons, images };
  }

  async byteCount(): Promise<number> {
    return (await this.#stat(this.uri)).size;
  }

  /** The file, in a buffer of its own: one that is posted goes with all that lies behind it. */
  bytes(): Promise<ArrayBuffer> {
    return this.#read(this.uri);
  }

  /** The roughness map that the treatment names; null where it names none. */
  async roughness(): Promise<ArrayBuffer | null> {
    const uri = await this.roughnessUri();
    return uri === null ? null : this.#read(uri);
  }

  async roughnessUri(): Promise<vscode.Uri | null> {
    const { texture, root, path, place } = await this.settings();
    const roughness = texture?.treatment.normal.roughness ?? null;
    if (roughness === null || !('path' in roughness)) return null;
    return place.uriOf(resolvePath(root.folder, sourcePath(roughness.path, path)));
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

// Every message between the extension host and a page. Types and their checks only; no file in core imports this. A proof's page
// asks by HostCalls and gets a Reply, and is told by HostEvent; a review's asks by ReviewCalls (review/want.ts) and is told by
// ReviewEvent. Every message carries the protocol's version.

import type { SourceHeader } from './codec/source.ts';
import type { ImageUse } from './manifest/manifest.ts';
import type { Problem } from './problem.ts';
import type { BuiltImage, Opening } from './proof/opening.ts';
import type { Picture, PrintStats } from './proof/want.ts';
import type { Origin, Treatment } from './treatment/treatment.ts';

/** Raised when a message changes its shape; a page of another version is told to reload. */
export const PROTOCOL = 2;

/** What the page asks the host for. A call's name fixes the shape of its reply. */
export interface HostCalls {
  /** Handshake. Asked again after a reload and when the page becomes visible. */
  open(): OpenReply;
  /** The settings' own print where the page opens, made by the host while the file's bytes are still to come: the image asked
   *  for, or a coarser level where that has more than `FIRST_PRINT_BYTES` of codes. Null where the host makes none. It says
   *  nothing of hashes: the page judges by the codes themselves. */
  firstPrint(at: Opening): { readonly print: FirstPrint | null };
  /** The source file's bytes, and those of its roughness map where the treatment names one. */
  bytes(): { readonly image: ArrayBuffer; readonly roughness: ArrayBuffer | null };
  /** Builds this texture. Refused where the workspace is not trusted or has no disk. */
  build(): { readonly built: number; readonly unchanged: number; readonly failed: number };
  /** Whether the build's pixels of an image have this hash; null where nothing was built. The build's own hash stays here. */
  isBuilt(print: PrintHash): { readonly equal: boolean | null };
  /** Puts settings into the settings file, in an editor beside the proof, unsaved. */
  adopt(change: AdoptChange): { readonly path: string };
  /** Shows the settings file at the place of a key, or of the treatment that applies. */
  showSettings(place: { readonly key: string | null }): Record<string, never>;
  /** Puts text on the clipboard. */
  copy(text: { readonly text: string }): Record<string, never>;
  /** Asks where to, and writes what the page made. `path` is null where the user thought better of it. */
  save(file: { readonly name: string; readonly bytes: ArrayBuffer }): { readonly path: string | null };
  /** Shows the outputs of this texture in the explorer. */
  reveal(): Record<string, never>;
  /** Puts this texture's report, its treatment and what was measured, on the clipboard. */
  report(): Record<string, never>;
  /** Makes a file of this proof, with what the page keeps, and asks where to. `path` is null where the user thought better of it. */
  export(order: ExportOrder): { readonly path: string | null };
}

export type HostCall = keyof HostCalls;

/** The argument of a call of `Calls`; null for a call without one. */
export type QuestionOf<Calls, K extends keyof Calls> = Calls[K] extends (...asked: infer Q) => unknown
  ? Q extends [infer One]
    ? One
    : null
  : never;

/** What a call of `Calls` answers. */
export type AnswerOf<Calls, K extends keyof Calls> = Calls[K] extends (...asked: never) => infer A ? A : never;

export type ReplyOf<Calls, K extends keyof Calls> = { readonly ok: AnswerOf<Calls, K> } | { readonly problem: Problem };

export type Question<K extends HostCall> = QuestionOf<HostCalls, K>;

export type Reply<K extends HostCall> = ReplyOf<HostCalls, K>;

/** From the page: one question. `id` is the page's own and comes back with the reply. */
export interface RequestOf<Calls, K extends keyof Calls = keyof Calls> {
  readonly protocol: number;
  readonly kind: 'ask';
  readonly id: number;
  readonly call: K;
  readonly question: QuestionOf<Calls, K>;
}

export type Request<K extends HostCall = HostCall> = RequestOf<HostCalls, K>;

/** To the page: one reply, with the revision of the source and settings that it speaks of. */
export interface ResponseOf<Calls, K extends keyof Calls = keyof Calls> {
  readonly protocol: number;
  readonly kind: 'reply';
  readonly id: number;
  readonly revision: number;
  readonly reply: ReplyOf<Calls, K>;
}

export type Response<K extends HostCall = HostCall> = ResponseOf<HostCalls, K>;

/** To a review's page, unasked: another texture is at hand, or the list says something else of it. */
export interface ReviewEvent {
  readonly protocol: number;
  readonly kind: 'texture';
  readonly revision: number;
}

/** To the page, unasked. */
export type HostEvent =
  /** The file's bytes changed on disk, or it is gone (`present` is false). */
  | { readonly protocol: number; readonly kind: 'source'; readonly revision: number; readonly present: boolean }
  /** The settings that apply changed, as typed in an editor or on disk. */
  | {
      readonly protocol: number;
      readonly kind: 'settings';
      readonly revision: number;
      readonly settings: SettingsReply;
    }
  /** Somebody asked for an export by a command: the page is to ask for it, since it knows what it shows. */
  | { readonly protocol: number; readonly kind: 'export'; readonly form: ExportOrder['form'] }
  /** The extension's own settings changed. */
  | {
      readonly protocol: number;
      readonly kind: 'preferences';
      readonly revision: number;
      readonly preferences: Preferences;
    }
  /** The outputs or the manifest changed. */
  | { readonly protocol: number; readonly kind: 'built'; readonly revision: number; readonly state: BuiltState };

export interface OpenReply {
  /** File name, and the path relative to its root. */
  readonly name: string;
  readonly path: string;
  readonly byteCount: number;
  readonly settings: SettingsReply;
  readonly state: BuiltState;
  readonly abilities: Abilities;
  readonly preferences: Preferences;
  /** Translations of the page's own words, by English text; empty in English. */
  readonly words: Readonly<Record<string, string>>;
  /** What was left out of an exported page; null where nothing was. */
  readonly remark: string | null;
}

/** What the settings say about this texture; `treatment` is null where they cannot be read, `problems` then says why. */
export interface SettingsReply {
  /** Root-relative name of the settings file; null where there is none. */
  readonly file: string | null;
  readonly treatment: Treatment | null;
  readonly origins: readonly Origin[];
  readonly problems: readonly Problem[];
  /** The last treatment that matches this texture, with its globs and how many textures it applies to. */
  readonly matching: { readonly index: number; readonly globs: readonly string[]; readonly textures: number } | null;
}

export type BuiltState =
  | { readonly kind: 'not-built' }
  | { readonly kind: 'built' }
  | { readonly kind: 'stale'; readonly moved: readonly string[] }
  /** Nobody can say here: no disk, or no hash yet. */
  | { readonly kind: 'unknown' };

/** A print that a page made: its image, and the hash of its pixels. */
export interface PrintHash {
  readonly use: ImageUse;
  readonly level: number | null;
  readonly target: string | null;
  readonly pixels: string;
}

/** What the host's worker made of the file. */
export interface FirstPrint {
  readonly header: SourceHeader;
  readonly treatment: Treatment;
  readonly image: BuiltImage;
  readonly picture: Picture;
  readonly stats: PrintStats;
}

/** Most bytes of codes in a first print: moving more to a page takes longer than making it there. */
export const FIRST_PRINT_BYTES = 2 ** 20;

/** What can be done here; a text says why not, and null leaves it out: an exported page has no host to ask. */
export interface Abilities {
  readonly build: true | string | null;
  readonly adopt: true | string | null;
  readonly reveal: true | string | null;
  readonly settings: true | null;
  /** `page`: a page can be made, a sheet cannot. */
  readonly export: true | 'page' | null;
}

/** Settings of the extension that the page follows. */
export interface Preferences {
  readonly backdrop: 'checker' | 'black' | 'white' | 'gray';
  /** Vertical field of view in degrees, and screen height in pixels, where the treatment does not say. */
  readonly fovY: number;
  readonly screenHeight: number;
  /** Least milliseconds between two swaps, 333 or more. */
  readonly swapDwell: number;
}

/** Settings to adopt: keys of a treatment as the settings file spells them. */
export interface AdoptChange {
  /** `file` adds a last treatment for this file alone; `matching` changes the last treatment that matches. */
  readonly scope: 'file' | 'matching';
  readonly settings: Readonly<Record<string, unknown>>;
}

/** What to export: one picture, or one page that stands alone. `state` is what the page keeps, as it gives it to `keep`. */
export interface ExportOrder {
  readonly form: 'sheet' | 'page';
  readonly state: Readonly<Record<string, unknown>>;
}

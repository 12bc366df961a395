import { inertJson } from '../../core/export/document.ts';
import { type CarriedProof, IMAGE_BLOCK, PROOF_BLOCK, ROUGHNESS_BLOCK } from '../../core/export/proof-page.ts';
import type { Problem } from '../../core/problem.ts';
import type { HostCall, HostCalls, OpenReply, Question, Reply } from '../../core/protocol.ts';
import { carriedBytes, carriedJson } from './carried.ts';
import type { Answered } from './link.ts';
import type { ProofLink } from './proof-link.ts';

/** A link to the data that an exported page carries, which answers as a host would: what needs an editor is refused in words.
 *  Null where the document carries no proof. */
export function openEmbeddedLink(source: Document): ProofLink | null {
  const proof = carriedJson(source, PROOF_BLOCK) as CarriedProof | null;
  if (proof === null) return null;
  let state = proof.state;
  let closed = false;

  return {
    async ask<K extends HostCall>(call: K, question: Question<K>): Promise<Answered<HostCalls, K>> {
      if (closed) return { revision: 0, reply: { problem: unexpected('The page is closed') } };
      try {
        return { revision: 0, reply: (await answer(source, proof, { call, question })) as Reply<K> };
      } catch (error) {
        return { revision: 0, reply: { problem: unexpected(error instanceof Error ? error.message : String(error)) } };
      }
    },
    // Nothing outside changes what the page carries.
    listen: () => undefined,
    kept: () => state ?? null,
    keep: (kept) => {
      state = kept;
    },
    close: () => {
      closed = true;
    },
  };
}

async function answer(
  source: Document,
  proof: CarriedProof,
  asked: { readonly call: HostCall; readonly question: unknown },
): Promise<Reply<HostCall>> {
  switch (asked.call) {
    case 'open':
      return { ok: openReply(proof) };
    case 'bytes': {
      const image = await carriedBytes(source, IMAGE_BLOCK);
      if (image === null) return { problem: { code: 'file-empty', severity: 'error', values: {} } };
      return { ok: { image, roughness: await carriedBytes(source, ROUGHNESS_BLOCK) } };
    }
    case 'firstPrint':
      return { ok: { print: null } };
    case 'isBuilt':
      return { ok: { equal: null } };
    case 'copy':
      await navigator.clipboard.writeText((asked.question as Question<'copy'>).text);
      return { ok: {} };
    case 'save': {
      const { name, bytes } = asked.question as Question<'save'>;
      download(source, name, bytes);
      return { ok: { path: name } };
    }
    case 'export': {
      const { form, state } = asked.question as Question<'export'>;
      if (form !== 'page') return { problem: { code: 'exported-page', severity: 'error', values: {} } };
      const name = `${proof.name.replace(/\.[^.]*$/, '')}.proof.html`;
      download(source, name, new TextEncoder().encode(copyOf(source, { ...proof, state })));
      // Whether and where the browser keeps it, it says itself.
      return { ok: { path: null } };
    }
    case 'build':
    case 'adopt':
    case 'showSettings':
    case 'reveal':
    case 'report':
      return { problem: { code: 'exported-page', severity: 'error', values: {} } };
  }
}

function openReply({ name, path, byteCount, settings, preferences, words, remark }: CarriedProof): OpenReply {
  const { file, globs, treatment, origins } = settings;
  return {
    name,
    path,
    byteCount,
    settings: {
      file,
      treatment,
      origins,
      problems: [],
      matching: globs === null ? null : { index: 0, globs, textures: 0 },
    },
    state: { kind: 'unknown' },
    abilities: { build: null, adopt: null, reveal: null, settings: null, export: 'page' },
    preferences,
    words,
    remark,
  };
}

/** The document as it was opened, with another state of its proof: code, policy and source are what they are. */
function copyOf(source: Document, proof: CarriedProof): string {
  const root = source.documentElement.cloneNode(true) as Element;
  root.querySelector('proof-page')?.remove();
  const body = root.querySelector('body')!;
  // What stands after the body in a file is parsed into it, and would grow from copy to copy.
  while (body.lastChild instanceof Text) body.lastChild.remove();
  body.append('\n');
  root.querySelector(`#${PROOF_BLOCK}`)!.textContent = inertJson(proof);
  return `<!doctype html>\n${root.outerHTML}\n`;
}

/** Gives a file to the browser, which asks or not as it is set up. */
function download(source: Document, name: string, bytes: BlobPart): void {
  const url = URL.createObjectURL(new Blob([bytes]));
  const anchor = source.createElement('a');
  anchor.href = url;
  anchor.download = name;
  anchor.click();
  setTimeout(() => URL.revokeObjectURL(url), 10_000);
}

function unexpected(reason: string): Problem {
  return { code: 'unexpected', severity: 'error', values: { reason } };
}

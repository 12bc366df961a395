import type { Hash } from '../port.ts';
import { baseName } from '../treatment/paths/path.ts';
import type { Origin } from '../treatment/treatment.ts';
import { documentOf, type PageCode } from './document.ts';
import type { ProofOrder } from './order.ts';

/** Ids of what the page of a proof carries. */
export const PROOF_BLOCK = 'proof';
export const IMAGE_BLOCK = 'image';
export const ROUGHNESS_BLOCK = 'roughness';

/** Raised when what a page carries changes its shape; code and data are always of one export. */
const FORMAT = 1;

/** What is told in the block `PROOF_BLOCK`: the order without its bytes. */
export interface CarriedProof extends Omit<ProofOrder, 'image' | 'roughness'> {
  readonly format: typeof FORMAT;
  readonly byteCount: number;
  /** Translations of the page's words, by English text. */
  readonly words: Readonly<Record<string, string>>;
}

/** The proof as one HTML file that computes its prints from the source that it carries. Equal orders, words and code give equal
 *  texts. Doors ask what to keep of a large source first: core/export/keep.ts. */
export function proofPage(
  order: ProofOrder,
  page: {
    readonly code: PageCode;
    readonly language: string;
    readonly words: Readonly<Record<string, string>>;
  },
  newHash: () => Hash,
): string {
  const { image, roughness, ...rest } = order;
  const carried: CarriedProof = {
    format: FORMAT,
    ...rest,
    settings: { ...rest.settings, origins: rest.settings.origins.map(shareable) },
    byteCount: image.length,
    words: page.words,
  };
  return documentOf(
    {
      title: order.name,
      language: page.language,
      code: page.code,
      blocks: [
        { id: PROOF_BLOCK, json: carried },
        { id: IMAGE_BLOCK, bytes: image },
        ...(roughness === null ? [] : [{ id: ROUGHNESS_BLOCK, bytes: roughness }]),
      ],
    },
    newHash,
  );
}

/** A file that is sent about tells no folders of the machine that made it. */
function shareable(origin: Origin): Origin {
  return origin.path === undefined ? origin : { ...origin, path: baseName(origin.path) };
}

import type { SourceHeader } from '../codec/source.ts';
import { figure } from '../figures.ts';
import { ALGORITHM } from '../manifest/manifest.ts';
import { type Block, CONTENT_WIDTH, MARGIN } from './block.ts';
import { COLOR_DIFFERENCE } from './difference.ts';
import type { SheetView } from './draw-picture.ts';
import type { ProofOrder } from './order.ts';
import { BACKDROP_WORDS, LINE, SOFT } from './palette.ts';
import type { SheetPrint } from './prints.ts';
import { isSeenThrough } from './shade.ts';
import { drawText, lineHeight, wrapText } from './text.ts';

/** How the prints are shown, and what the sheet leaves out, in sentences. */
export function footBlock(
  order: ProofOrder,
  facts: { readonly header: SourceHeader; readonly view: SheetView; readonly shown: readonly SheetPrint[] },
): Block {
  const lines = sentencesOf(order, facts).flatMap((each) => wrapText(each, CONTENT_WIDTH, SOFT));
  return {
    height: 34 + lines.length * lineHeight(SOFT) + 24,
    draw(canvas, top) {
      canvas.fill({ left: MARGIN, top: top + 12, width: CONTENT_WIDTH, height: 1 }, LINE);
      for (const [i, line] of lines.entries()) {
        drawText(canvas, line, { x: MARGIN, y: top + 28 + i * lineHeight(SOFT) }, SOFT);
      }
      return [];
    },
  };
}

function sentencesOf(
  { remark, settings }: ProofOrder,
  {
    header,
    view,
    shown,
  }: { readonly header: SourceHeader; readonly view: SheetView; readonly shown: readonly SheetPrint[] },
): readonly string[] {
  const { alpha, content } = settings.treatment;
  const pictures = shown.flatMap(({ picture }) => picture ?? []);
  const sentences: string[] = remark === null ? [] : [remark];
  switch (view.show) {
    case 'color':
      if (content === 'normal') sentences.push('Normals are shown as their codes.');
      break;
    case 'mask':
      sentences.push(
        `Masks are shown as a renderer tests them: what passes alpha ${alpha.test} ${figure(alpha.cutoff, 3)} is drawn, the rest is not.`,
      );
      break;
    case 'bare':
      sentences.push('Color is shown without alpha, also where alpha hides it.');
      break;
    case 'lit':
      sentences.push('Normals are shown as a white surface lit by one lamp.');
      break;
    default:
      sentences.push(`The channel ${view.show} is shown alone, as gray.`);
  }
  if (pictures.some((picture) => isSeenThrough(picture, view.show))) {
    const blend = view.treatment.view.blend === 'linear' ? 'in linear light' : 'in code space';
    const how = view.show === 'mask' ? '' : `, blended ${blend} and rounded to the nearest code`;
    sentences.push(`What is transparent shows ${BACKDROP_WORDS[view.backdrop]}${how}.`);
  }
  if (header.depth === 16) sentences.push('Codes of 16 bits are shown as the nearest of 8 bits.');
  if (shown.some(({ cutFrom }) => cutFrom !== null)) {
    sentences.push(
      'Images too large for the sheet are cut to their middle; numbers and hashes are those of the whole image.',
    );
  }
  if (shown.some(({ measured }) => measured.some(({ name }) => name === 'halo'))) {
    sentences.push('Halo is the worst overshoot before clamping, in 8-bit codes.');
  }
  if (shown.some(({ measured }) => measured.some(({ name }) => name === COLOR_DIFFERENCE))) {
    sentences.push('Differences of prints are OKLab distances; 0.02 is about what is just seen.');
  }
  sentences.push(
    `# begins the hash of an image's pixels, as its manifest has it. Codes are shown as sRGB; what they look like depends on the screen. Made by Sizeproof, algorithm ${ALGORITHM}.`,
  );
  return sentences;
}

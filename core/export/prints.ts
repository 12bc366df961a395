import type { Cancel } from '../port.ts';
import { Cancelled } from '../port.ts';
import { Refusal, say } from '../problem.ts';
import type { ProofBench } from '../proof/bench.ts';
import { cutMiddle } from '../proof/picture.ts';
import { type Slot, treatmentOf } from '../proof/slot.ts';
import type { Picture, Print, PrintImage } from '../proof/want.ts';
import type { Extent } from '../raster/raster.ts';
import type { Origin, Treatment } from '../treatment/treatment.ts';
import { differenceOf } from './difference.ts';
import { type Measured, measuredOf } from './measured.ts';
import type { SheetTarget } from './targets.ts';

/** An image as it stands on the sheet. */
export interface SheetPrint {
  /** Null where it cannot be made; `problem` says why. */
  readonly picture: Picture | null;
  /** Of the whole image, where the picture is only its middle. */
  readonly cutFrom: Extent | null;
  /** Bytes of its codes. */
  readonly bytes: number;
  readonly measured: readonly Measured[];
  /** The pixel hash; empty between levels. */
  readonly pixels: string;
  readonly problem: string | null;
}

/** Prints of the settings at every target, one after another. */
export async function targetPrints(
  bench: ProofBench,
  targets: readonly SheetTarget[],
  order: { readonly treatment: Treatment; readonly fit: (extent: Extent) => number | null },
  cancel: Cancel,
): Promise<readonly SheetPrint[]> {
  const { treatment } = order;
  const prints: SheetPrint[] = [];
  let base: number | null = null;
  for (const { image, extent } of targets) {
    const { print, sheetPrint } = await printOf(bench, { image, treatment, base, side: order.fit(extent) }, cancel);
    if ('level' in image && image.level === 0) base = print?.stats.coverage ?? null;
    prints.push(sheetPrint);
  }
  return prints;
}

/** Prints of one image by several kernels and treatments; what each differs from the first is measured too. */
export async function comparedPrints(
  bench: ProofBench,
  slots: readonly Slot[],
  order: {
    readonly image: PrintImage;
    readonly treatment: Treatment;
    readonly origins: readonly Origin[];
    readonly side: number | null;
  },
  cancel: Cancel,
): Promise<readonly SheetPrint[]> {
  const prints: SheetPrint[] = [];
  let own: Picture | null = null;
  for (const slot of slots) {
    const treatment = treatmentOf(slot, order.treatment, order.origins);
    const { image, side } = order;
    const { print, sheetPrint } = await printOf(bench, { image, treatment, base: null, side }, cancel);
    own ??= print?.picture ?? null;
    const difference = slot.id === 0 || print === null || own === null ? [] : differenceOf(print.picture, own);
    prints.push({ ...sheetPrint, measured: [...sheetPrint.measured, ...difference] });
  }
  return prints;
}

async function printOf(
  bench: ProofBench,
  want: {
    readonly image: PrintImage;
    readonly treatment: Treatment;
    readonly base: number | null;
    /** Longest side of what is shown; null is all of it. */
    readonly side: number | null;
  },
  cancel: Cancel,
): Promise<{ readonly print: Print | null; readonly sheetPrint: SheetPrint }> {
  if (cancel.cancelled) throw new Cancelled();
  const { image, treatment, side } = want;
  try {
    const print = (await bench.answer({ kind: 'print', treatment, image }, cancel)) as Print;
    const hashed = await bench.answer({ kind: 'pixels', treatment, image }, cancel);
    const told = await bench.answer({ kind: 'halo', treatment, image }, cancel);
    const halo = told.kind === 'halo' ? told.halo : null;
    const { picture, stats } = print;
    const { width, height } = picture.extent;
    const isCut = side !== null && Math.max(width, height) > side;
    return {
      print,
      sheetPrint: {
        picture: isCut ? cutMiddle(picture, side) : picture,
        cutFrom: isCut ? picture.extent : null,
        bytes: picture.codes.byteLength,
        measured: measuredOf(stats, halo, want),
        pixels: hashed.kind === 'pixels' ? hashed.pixels : '',
        problem: null,
      },
    };
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    const problem = say(error.problem);
    return {
      print: null,
      sheetPrint: { picture: null, cutFrom: null, bytes: 0, measured: [], pixels: '', problem },
    };
  }
}

import { extentText } from '../figures.ts';
import { type Slot, treatmentOf } from '../proof/slot.ts';
import type { Extent } from '../raster/raster.ts';
import type { KernelChoice, Origin, Treatment } from '../treatment/treatment.ts';
import { type Block, CONTENT_WIDTH, headingBlock, MARGIN, type Place } from './block.ts';
import type { Canvas } from './canvas.ts';
import { drawPicture, type SheetView } from './draw-picture.ts';
import { changeWords, paramWords } from './kernels.ts';
import { HEADING, LABEL, PLAIN, RAIL, SOFT, WARNING } from './palette.ts';
import type { SheetPrint } from './prints.ts';
import { drawText, lineHeight, type Style, textWidth, wrapText } from './text.ts';

const GAP = 24;
const MOST_COLUMNS = 4;

/** Highest that a print is magnified to. */
const PRINT_HEIGHT = 480;

/** The longest side of a print that has a card to itself beside so many others. */
export function kernelSide(count: number): number {
  return Math.min(PRINT_HEIGHT, cardWidth(count));
}

/** Prints of one image by several kernels, magnified by one whole number and beside it at true size, with their numbers. */
export function kernelSection(
  slots: readonly Slot[],
  prints: readonly SheetPrint[],
  facts: {
    readonly view: SheetView;
    /** Of the image: `level 2`. */
    readonly label: string;
    readonly extent: Extent;
    readonly kernelOf: (treatment: Treatment) => KernelChoice;
    readonly origins: readonly Origin[];
  },
): readonly Block[] {
  const { view, label, extent } = facts;
  const width = cardWidth(slots.length);
  const shown = prints.find(({ picture }) => picture !== null)?.picture?.extent ?? { width: 1, height: 1 };
  const zoom = Math.max(1, Math.floor(Math.min(width / shown.width, PRINT_HEIGHT / shown.height)));
  const cards = slots.map((slot, i): Card => {
    const kernel = facts.kernelOf(treatmentOf(slot, view.treatment, facts.origins));
    return cardOf(slot, kernel, prints[i], { width, zoom });
  });
  const size = extentText(extent) === label.replace('x', '×') ? label : `${label}, ${extentText(extent)}`;
  const magnified = zoom === 1 ? 'at true size' : `${zoom} pixels a texel, and beside their numbers at true size`;
  const columns = columnsFor(slots.length);
  const rows = Array.from({ length: Math.ceil(cards.length / columns) }, (_, row) =>
    cards.slice(row * columns, (row + 1) * columns),
  );
  return [
    headingBlock(`Kernels at ${size}`, magnified, { heading: HEADING, words: SOFT }),
    ...rows.map((row) => rowBlock(row, { width, zoom, shown, view })),
  ];
}

interface Line {
  readonly text: string;
  readonly style: Style;
}

interface Card {
  readonly slot: Slot;
  readonly name: string;
  readonly print: SheetPrint;
  /** Below the name. */
  readonly words: readonly Line[];
  /** Below the print. */
  readonly numbers: readonly Line[];
}

function columnsFor(count: number): number {
  return Math.min(MOST_COLUMNS, Math.max(2, count));
}

function cardWidth(count: number): number {
  const columns = columnsFor(count);
  return Math.floor((CONTENT_WIDTH - GAP * (columns - 1)) / columns);
}

const TRUE_GAP = 14;

function cardOf(
  slot: Slot,
  kernel: KernelChoice,
  print: SheetPrint,
  { width, zoom }: { readonly width: number; readonly zoom: number },
): Card {
  const words = [paramWords(kernel), ...changeWords(slot.change)].filter((each) => each !== '').join(', ');
  const beside = zoom > 1 && print.picture !== null ? print.picture.extent.width + TRUE_GAP : 0;
  return {
    slot,
    name: kernel.name,
    print,
    words: words === '' ? [] : wrapText(words, width, SOFT).map((text) => ({ text, style: SOFT })),
    numbers: numberLines(print, width - beside),
  };
}

function numberLines(print: SheetPrint, width: number): readonly Line[] {
  const wrapped = (text: string, style: Style): readonly Line[] =>
    wrapText(text, width, style).map((line) => ({ text: line, style }));
  if (print.problem !== null) return wrapped(print.problem, WARNING);
  const cut = print.cutFrom === null ? [] : wrapped(`its middle ${extentText(print.picture!.extent)}`, PLAIN);
  const measured = print.measured.flatMap(({ name, text, over }) =>
    over === null ? wrapped(`${name} ${text}`, PLAIN) : wrapped(`! ${name} ${text}, ${over}`, WARNING),
  );
  const pixels = print.pixels === '' ? [] : wrapped(`#${print.pixels.slice(0, 8)}`, SOFT);
  return [...cut, ...measured, ...pixels];
}

const NAME_HEIGHT = 30;

function rowBlock(
  cards: readonly Card[],
  row: { readonly width: number; readonly zoom: number; readonly shown: Extent; readonly view: SheetView },
): Block {
  const { width, zoom, shown } = row;
  const words = Math.max(...cards.map((card) => card.words.length), 1) * lineHeight(SOFT);
  const print = NAME_HEIGHT + words + 4;
  const below = print + shown.height * zoom + 12;
  const numbers = Math.max(...cards.map((card) => card.numbers.length)) * lineHeight(PLAIN);
  const foot = Math.max(numbers, zoom > 1 ? shown.height : 0);
  return {
    height: below + foot + 30,
    draw: (canvas, top) =>
      cards.flatMap((card, i) => drawCard(canvas, card, { x: MARGIN + i * (width + GAP), top, print, below }, row)),
  };
}

function drawCard(
  canvas: Canvas,
  card: Card,
  at: { readonly x: number; readonly top: number; readonly print: number; readonly below: number },
  { zoom, view }: { readonly zoom: number; readonly view: SheetView },
): readonly Place[] {
  const { x, top } = at;
  drawText(canvas, card.name, { x, y: top }, HEADING);
  if (card.slot.id === 0) drawTag(canvas, 'settings', { x: x + textWidth(card.name, HEADING) + 14, y: top });
  for (const [i, { text, style }] of card.words.entries()) {
    drawText(canvas, text, { x, y: top + NAME_HEIGHT + i * lineHeight(style) }, style);
  }
  const { picture } = card.print;
  const places: Place[] = [];
  let indent = 0;
  if (picture !== null) {
    const { width, height } = picture.extent;
    const place = (left: number, above: number, scale: number): void => {
      drawPicture(canvas, picture, { left, top: above, zoom: scale }, view);
      const box = { left, top: above, width: width * scale, height: height * scale };
      places.push({ kind: 'kernel', label: card.name, box, zoom: scale });
    };
    place(x, top + at.print, zoom);
    if (zoom > 1) {
      place(x, top + at.below, 1);
      indent = width + TRUE_GAP;
    }
  }
  for (const [i, { text, style }] of card.numbers.entries()) {
    drawText(canvas, text, { x: x + indent, y: top + at.below + i * lineHeight(style) }, style);
  }
  return places;
}

/** A word in a frame. */
function drawTag(canvas: Canvas, text: string, { x, y }: { readonly x: number; readonly y: number }): void {
  const width = textWidth(text, LABEL) + 12;
  canvas.frame({ left: x, top: y - 1, width, height: 18 }, RAIL);
  drawText(canvas, text, { x: x + 6, y: y + 4 }, LABEL);
}

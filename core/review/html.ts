import { base64, base64OfHex } from '../export/base64.ts';
import type { Hash } from '../port.ts';
import { encodeUtf8 } from '../treatment/utf8.ts';
import type { ReviewPictures } from './pictures.ts';
import type { ReportRow } from './report.ts';
import type { Review } from './review.ts';
import type { SizeFigures, SizeReview } from './sizes.ts';
import { figure, percent } from './verdict.ts';
import { isSeen, sayImage } from './visible.ts';

export interface HtmlReport {
  /** How people call the two ends. */
  readonly before: string;
  readonly after: string;
  /** In the order in which they are shown. */
  readonly entries: readonly {
    readonly row: ReportRow;
    readonly review: Review | null;
    readonly pictures: ReviewPictures | null;
  }[];
  readonly summary: string;
  readonly problems: readonly string[];
}

/** A report as one HTML file that needs no script, no network and no other file: what the table and the Markdown say, with pictures
 *  of each change at the size that tells most, and the figures of every size. Equal arguments give equal texts. */
export function reportHtml({ before, after, entries, summary, problems }: HtmlReport, newHash: () => Hash): string {
  const hash = newHash();
  hash.update(encodeUtf8(STYLE));
  const policy = `default-src 'none'; img-src data:; style-src 'sha256-${base64OfHex(hash.hex())}'; base-uri 'none'; form-action 'none'`;
  const title = `Texture changes, ${before} to ${after}`;
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${escapeHtml(policy)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<title>${escapeHtml(title)}</title>
<style>${STYLE}</style>
</head>
<body>
<main>
<h1>${escapeHtml(title)}</h1>
<p>${escapeHtml(summary)}</p>
${problems.map((each) => `<p class="harm">${escapeHtml(each)}</p>\n`).join('')}${entries.length === 0 ? '' : listOf(entries)}
${entries.map(sectionOf).join('\n')}
<footer>Pictures are enlarged without smoothing. In differences black is equal and lighter is further apart; blue is color that
alpha 0 hides. What colors look like on an uncalibrated screen is no basis for a decision about color; the numbers are.</footer>
</main>
</body>
</html>
`;
}

type Entry = HtmlReport['entries'][number];

function listOf(entries: readonly Entry[]): string {
  const rows = entries.map(({ row }, index) => {
    const { score, status, texture, verdict, seen, harms } = row;
    const what = [...harms.map((each) => `<strong>${escapeHtml(sentence(each))}</strong>`), escapeHtml(verdict)];
    return `<tr><td class="number">${score}</td><td>${escapeHtml(status)}</td><th scope="row"><a href="#t${index}">${escapeHtml(texture)}</a></th><td>${what.join(' ')}</td><td>${escapeHtml(seen)}</td></tr>`;
  });
  return `<div class="wide"><table class="list">
<thead><tr><th scope="col">Impact</th><th scope="col">Change</th><th scope="col">Texture</th><th scope="col">What changed</th><th scope="col">Seen at</th></tr></thead>
<tbody>
${rows.join('\n')}
</tbody>
</table></div>`;
}

function sectionOf({ row, review, pictures }: Entry, index: number): string {
  const { score, status, texture, verdict, seen, harms, notes, remarks } = row;
  return `<section id="t${index}">
<h2>${escapeHtml(texture)}</h2>
<p class="quiet">${escapeHtml(status)}, impact ${score}</p>
${[...harms.map(sentence), ...remarks].map((each) => `<p class="harm">${escapeHtml(each)}</p>\n`).join('')}<p>${escapeHtml(verdict)}${seen === '' ? '' : ` Seen at ${escapeHtml(seen)}.`}</p>
${notes.length === 0 ? '' : `<p class="quiet">${escapeHtml(sentence(notes.join('; ')))}</p>\n`}${pictures === null ? '' : picturesOf(pictures, texture)}${review === null || review.sizes.length === 0 ? '' : sizesOf(review.sizes)}</section>`;
}

function picturesOf({ image, extent, before, after, difference }: ReviewPictures, texture: string): string {
  const where = `${sayImage(image)}, ${extent.width}x${extent.height}`;
  // Whole factors, so that every texel is as large as the next.
  const factor = Math.max(1, Math.floor(SHOWN_PIXELS / Math.max(extent.width, extent.height)));
  const figureOf = (name: string, file: Uint8Array | null): string => {
    if (file === null) return '';
    const alt = escapeHtml(`${texture}, ${name}, ${where}`);
    const size = `width="${extent.width * factor}" height="${extent.height * factor}"`;
    return `<figure><img alt="${alt}" ${size} src="data:image/png;base64,${base64(file)}"><figcaption>${name}, ${escapeHtml(where)}</figcaption></figure>`;
  };
  return `<div class="pictures">${figureOf('before', before)}${figureOf('after', after)}${figureOf('difference', difference)}</div>\n`;
}

/** Longer side of a picture on the page, in CSS pixels, where its texels allow it. */
const SHOWN_PIXELS = 256;

function sizesOf(sizes: readonly SizeReview[]): string {
  const columns: readonly (readonly [string, (figures: SizeFigures) => number | null])[] = [
    ['Coverage', ({ coverage }) => coverage],
    ['Mean luminance', ({ luminance }) => luminance],
    ['Normal length', ({ normalLength }) => normalLength],
  ];
  const used = columns.filter(([, of]) =>
    sizes.some(({ before, after }) => [before, after].some((each) => each !== null && of(each) !== null)),
  );
  const rows = sizes.map((size) => {
    const { image, extent, difference, before, after } = size;
    const cells = used.map(([, of]) => `<td class="number">${moved(before && of(before), after && of(after))}</td>`);
    const apart =
      difference === null
        ? '<td></td><td></td>'
        : `<td class="number">${percent(difference.share)}</td><td class="number">${figure(difference.worst)}</td>`;
    const seen = isSeen(size);
    return `<tr><th scope="row">${escapeHtml(sayImage(image))}</th><td class="number">${extent.width}x${extent.height}</td><td>${seen === null ? '' : seen ? 'seen' : 'not seen'}</td>${apart}${cells.join('')}</tr>`;
  });
  return `<details><summary>Every size</summary><div class="wide"><table>
<thead><tr><th scope="col">Size</th><th scope="col">Texels</th><th scope="col">Change</th><th scope="col">Texels changed</th><th scope="col">Furthest apart</th>${used.map(([name]) => `<th scope="col">${name}</th>`).join('')}</tr></thead>
<tbody>
${rows.join('\n')}
</tbody>
</table></div></details>
`;
}

function moved(was: number | null, is: number | null): string {
  const text = (value: number | null): string => (value === null ? 'none' : percent(value));
  return was === is ? text(was) : `${text(was)} to ${text(is)}`;
}

function sentence(text: string): string {
  return `${text.charAt(0).toUpperCase()}${text.slice(1)}.`;
}

function escapeHtml(text: string): string {
  return text
    .replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ')
    .replace(/[&<>"']/g, (character) => `&#${character.charCodeAt(0)};`);
}

/** Colors are the system's own; the checker behind pictures is content, and the same in the dark. */
const STYLE = `
:root { color-scheme: light dark; font: 15px/1.5 system-ui, sans-serif; }
body { margin: 0; color: CanvasText; background: Canvas; }
main { max-width: 76rem; margin: 0 auto; padding: 1.5rem 1rem; }
h1 { font-size: 1.4rem; } h2 { font-size: 1.1rem; margin: 0; overflow-wrap: anywhere; }
section { border-top: 1px solid GrayText; padding: 1rem 0; }
table { border-collapse: collapse; margin: 1rem 0; }
th, td { text-align: left; vertical-align: top; padding: 0.25rem 1rem 0.25rem 0; font-weight: normal; }
thead th { font-weight: 600; border-bottom: 1px solid GrayText; }
.list td:nth-child(4) { min-width: 18rem; }
.number { font-variant-numeric: tabular-nums; white-space: nowrap; }
.quiet { opacity: 0.75; margin: 0; }
.harm { border-left: 4px solid; padding-left: 0.6rem; font-weight: 600; }
.wide { overflow-x: auto; }
.pictures { display: flex; flex-wrap: wrap; gap: 1rem; margin: 1rem 0; }
figure { margin: 0; }
img { image-rendering: pixelated; display: block; max-width: 100%; height: auto;
  background: repeating-conic-gradient(#8e8e8e 0 25%, #666666 0 50%) 0 0 / 16px 16px; }
footer { border-top: 1px solid GrayText; padding-top: 1rem; opacity: 0.75; }
`;

import { css, html } from 'lit';
import type { DIFFERENCE_RAMP } from '../prints/backdrop.ts';
import { ZOOMS } from '../prints/frame.ts';
import type { Show } from '../state/state.ts';
import { t } from '../words/t.ts';

// What the view bars of a proof and of a review are made of.

export const viewStyles = css`
  :host {
    display: flex;
    flex-wrap: wrap;
    align-items: center;
    gap: 4px 12px;
    padding: 4px 10px;
    border-bottom: 1px solid var(--proof-line);
  }
  .gap {
    flex: 1;
  }
  .group {
    display: inline-flex;
    align-items: center;
    gap: 4px;
  }
  .ends {
    flex-wrap: wrap;
    gap: 4px 12px;
  }
  .step {
    width: 1.7em;
    padding: 0;
  }
  .zoom {
    min-width: 2.9em;
    text-align: center;
  }
  canvas {
    width: 96px;
    height: 10px;
    border: 1px solid var(--proof-line);
  }
`;

/** A named list to choose from. */
export function choice<T extends string>(
  name: string,
  value: T,
  choices: readonly (readonly [T, string])[],
  choose: (value: T) => void,
) {
  return html`<label>
    <span class="quiet">${name}</span>
    <select .value=${value} @change=${(event: Event) => choose((event.target as HTMLSelectElement).value as T)}>
      ${choices.map(([each, text]) => html`<option value=${each} ?selected=${each === value}>${text}</option>`)}
    </select>
  </label>`;
}

/** Smaller, larger, fit and true size. `shown` is the zoom that is seen, `chosen` is null where it follows the frame. */
export function zoomButtons(shown: number, chosen: number | null, choose: (zoom: number | null) => void) {
  const step = (next: number | undefined) => next !== undefined && choose(next);
  return html`<span class="group" role="group" aria-label=${t('Zoom')}>
    <button
      class="step"
      aria-label=${t('Smaller')}
      ?disabled=${shown <= ZOOMS[0]}
      @click=${() => step([...ZOOMS].reverse().find((each) => each < shown))}
    >
      −
    </button>
    <span class="number zoom" title=${t('Device pixels a texel')}>${shown}:1</span>
    <button
      class="step"
      aria-label=${t('Larger')}
      ?disabled=${shown >= ZOOMS[ZOOMS.length - 1]}
      @click=${() => step(ZOOMS.find((each) => each > shown))}
    >
      +
    </button>
    <button aria-pressed=${chosen === null} @click=${() => choose(null)}>${t('Fit')}</button>
    <button aria-pressed=${chosen === 1} title=${t('One texel a device pixel')} @click=${() => choose(1)}>
      ${t('True size')}
    </button>
  </span>`;
}

/** Tells of being held by `swap-hold`, which a page waits for. */
export function swapButton() {
  const hold = (which: 'down' | 'up') => (event: Event) => {
    event.currentTarget?.dispatchEvent(new CustomEvent('swap-hold', { detail: which, bubbles: true, composed: true }));
  };
  const keyed = (which: 'down' | 'up') => (event: KeyboardEvent) => {
    if (isPress(event)) hold(which)(event);
  };
  return html`<button
    title=${t('Hold the button, or the key X')}
    @pointerdown=${hold('down')}
    @pointerup=${hold('up')}
    @pointerleave=${hold('up')}
    @keydown=${keyed('down')}
    @keyup=${keyed('up')}
    @blur=${hold('up')}
  >
    ${t('Hold to swap')} (X)
  </button>`;
}

export const backdropNames = () =>
  [
    ['checker', t('checker')],
    ['black', t('black')],
    ['gray', t('gray')],
    ['white', t('white')],
  ] as const;

export const magnifyNames = () =>
  [
    ['nearest', t('crisp')],
    ['bilinear', t('bilinear')],
  ] as const;

export const compareNames = () =>
  [
    ['beside', t('side by side')],
    ['divider', t('divider')],
    ['swap', t('swap')],
  ] as const;

/** Views of one picture: what its channels allow. */
export function pictureViews(of: {
  readonly channels: number;
  readonly content: 'color' | 'numbers';
  readonly normal: 'yes' | 'no';
  readonly mask: 'yes' | 'no';
}): readonly (readonly [Show, string])[] {
  const hasAlpha = of.channels % 2 === 0;
  const letters: readonly Show[] = of.channels >= 3 ? ['r', 'g', 'b'] : [];
  return [
    ['color', of.content === 'color' ? t('color') : t('codes')],
    ...(of.normal === 'yes' ? ([['lit', t('lit by a lamp')]] as const) : []),
    ...(of.mask === 'yes' && hasAlpha ? ([['mask', t('mask at cutoff')]] as const) : []),
    ...(hasAlpha
      ? ([
          ['a', t('alpha')],
          ['bare', t('color without alpha')],
        ] as const)
      : []),
    ...letters.map((each) => [each, t('channel {letter}', { letter: each })] as const),
  ];
}

function isPress(event: KeyboardEvent): boolean {
  return (event.key === ' ' || event.key === 'Enter') && !event.repeat;
}

export function drawRamp(canvas: HTMLCanvasElement, ramp: typeof DIFFERENCE_RAMP): void {
  const context = canvas.getContext('2d');
  if (context === null) return;
  const gradient = context.createLinearGradient(0, 0, canvas.width, 0);
  ramp.forEach((color, i) => {
    gradient.addColorStop(i / (ramp.length - 1), `rgb(${color.join(' ')})`);
  });
  context.fillStyle = gradient;
  context.fillRect(0, 0, canvas.width, 1);
}

import { html, LitElement, type PropertyValues } from 'lit';
import type { Wrap } from '../../../core/kernel/wrap.ts';
import type { ArtAnswer, Picture } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import { controls } from '../form/controls.ts';
import type { Line } from '../state/line.ts';
import type { Backdrop } from '../state/state.ts';
import { t } from '../words/t.ts';
import { fittingZoom, type Placement, place, ZOOMS } from './frame.ts';
import { drawOverlay, type PinMark } from './overlay.ts';
import { type Layer, Painter } from './painter.ts';
import { stageStyles } from './print-stage.styles.ts';
import type { View } from './view.ts';

/** Everything that a stage shows. */
export interface Scene {
  /** Extent that the frame is laid out for, also while its picture is still being made. */
  readonly extent: Extent;
  readonly picture: Picture | null;
  readonly reference: Picture | null;
  /** Shown right of the divider, or in place of the picture. */
  readonly partner: Picture | null;
  readonly compare: 'beside' | 'divider' | 'partner';
  readonly divider: number;
  readonly view: View;
  readonly backdrop: Backdrop;
  readonly magnify: 'nearest' | 'bilinear';
  readonly wrap: { readonly x: Wrap; readonly y: Wrap };
  readonly tiles: boolean;
  readonly zoom: number | null;
  readonly pan: { readonly x: number; readonly y: number };
  readonly marks: Uint16Array | null;
  /** Marks of pixel art; null for none. */
  readonly art: ArtAnswer | null;
  readonly cursor: { readonly x: number; readonly y: number } | null;
  /** Texels whose readings are pinned. */
  readonly pins: readonly PinMark[];
  readonly line: Line | null;
  /** Whether dragging draws the line of the cross-section in place of panning. */
  readonly draws: boolean;
  readonly label: string;
}

/** What the hand did on a stage; shares are of the picture's width and height. */
export type StageGesture =
  | { readonly kind: 'point'; readonly u: number; readonly v: number }
  | { readonly kind: 'pin'; readonly u: number; readonly v: number }
  | { readonly kind: 'pan'; readonly x: number; readonly y: number }
  | { readonly kind: 'zoom'; readonly zoom: number | null }
  | { readonly kind: 'divide'; readonly share: number }
  | { readonly kind: 'draw'; readonly line: Line };

/** One print in its frame: a canvas that lies on the device's pixels, and one over it for marks. */
export class PrintStage extends LitElement {
  static override properties = { scene: { attribute: false } };
  declare scene: Scene | null;
  #painter: Painter | null = null;
  #frame: Extent = { width: 0, height: 0 };
  #painted: readonly unknown[] = [];
  #overlaid: readonly unknown[] = [];
  #observer: ResizeObserver | null = null;
  #drag: {
    readonly x: number;
    readonly y: number;
    readonly pan: Scene['pan'];
    readonly from: [number, number];
  } | null = null;

  static override styles = [controls, stageStyles];

  constructor() {
    super();
    this.scene = null;
  }

  override render() {
    const { scene } = this;
    return html`
      <div
        class="hold"
        role="application"
        tabindex="0"
        aria-label=${scene?.label ?? ''}
        @pointermove=${this.#point}
        @pointerdown=${this.#press}
        @pointerup=${this.#release}
        @pointercancel=${this.#release}
        @dblclick=${this.#pin}
        @wheel=${this.#wheel}
        @keydown=${this.#key}
      >
        <canvas class="print" aria-hidden="true"></canvas>
        <canvas class="over" aria-hidden="true"></canvas>
      </div>
      ${
        scene?.compare === 'divider'
          ? html`<div
              class="divider"
              role="slider"
              tabindex="0"
              aria-label=${t('Divider')}
              aria-valuemin="0"
              aria-valuemax="100"
              aria-valuenow=${Math.round(scene.divider * 100)}
              aria-orientation="horizontal"
              @pointerdown=${this.#holdDivider}
              @pointermove=${this.#moveDivider}
              @keydown=${this.#keyDivider}
            ></div>`
          : null
      }
    `;
  }

  override firstUpdated(): void {
    this.#painter = new Painter(this.#canvas('.print'));
    this.#observer = new ResizeObserver(([entry]) => this.#resize(entry));
    const canvas = this.#canvas('.print');
    // Chromium tells the box in device pixels, already snapped to them, which no calculation from CSS pixels can.
    this.#observer.observe(canvas, { box: 'device-pixel-content-box' });
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    this.#observer?.disconnect();
  }

  override updated(_: PropertyValues): void {
    if (this.scene !== null) this.style.setProperty('--divider', `${this.scene.divider * 100}%`);
    this.#paint();
  }

  #canvas(which: string): HTMLCanvasElement {
    return this.renderRoot.querySelector<HTMLCanvasElement>(which)!;
  }

  #resize(entry: ResizeObserverEntry): void {
    const [box] = entry.devicePixelContentBoxSize;
    const frame = { width: box.inlineSize, height: box.blockSize };
    if (frame.width === this.#frame.width && frame.height === this.#frame.height) return;
    this.#frame = frame;
    for (const which of ['.print', '.over']) {
      const canvas = this.#canvas(which);
      canvas.width = this.#frame.width;
      canvas.height = this.#frame.height;
    }
    this.#paint();
  }

  /** Device pixels a texel, as shown. */
  get zoom(): number {
    const { scene } = this;
    if (scene === null || this.#frame.width === 0) return 1;
    const room = scene.tiles ? 3 : 1;
    const whole = { width: scene.extent.width * room, height: scene.extent.height * room };
    return scene.zoom ?? fittingZoom(whole, this.#frame);
  }

  get placement(): Placement {
    const { scene } = this;
    if (scene === null) return { zoom: 1, left: 0, top: 0 };
    return place(scene.extent, this.#frame, this.zoom, scene.pan);
  }

  #paint(): void {
    const { scene } = this;
    if (scene === null || this.#painter === null || this.#frame.width === 0 || this.#frame.height === 0) return;
    const { placement } = this;
    const ratio = window.devicePixelRatio;
    const inputs = paintInputs(scene, placement, this.#frame, ratio);
    if (inputs.some((each, i) => each !== this.#painted[i])) {
      this.#painted = inputs;
      this.#paintPrint(scene, placement, ratio);
    }
    const { extent, marks, art, cursor, pins, line } = scene;
    const over = [...inputs.slice(4), marks, art, cursor?.x, cursor?.y, JSON.stringify(pins), line];
    if (over.some((each, i) => each !== this.#overlaid[i])) {
      this.#overlaid = over;
      drawOverlay(this.#canvas('.over'), { extent, placement, ratio, marks, art, cursor, pins, line });
    }
    this.dataset.zoom = String(placement.zoom);
    this.dataset.left = String(placement.left);
    this.dataset.top = String(placement.top);
  }

  #paintPrint(scene: Scene, placement: Placement, ratio: number): void {
    const { extent, view, backdrop, magnify, wrap } = scene;
    const tiles = scene.tiles ? 3 : 1;
    const layers = this.#layers(scene);
    this.removeAttribute('data-painted');
    const painting = { layers, extent, placement, view, backdrop, magnify, wrap, tiles, ratio } as const;
    void this.#painter!.paint(painting).then((shown) => {
      const whole = scene.picture !== null && sameExtent(scene.picture.extent, extent);
      if (shown && whole) this.setAttribute('data-painted', '');
    });
  }

  #layers(scene: Scene): readonly Layer[] {
    const { picture, partner, reference, compare } = scene;
    const { width } = this.#frame;
    const layer = (each: Picture | null, left: number, right: number): Layer[] =>
      each === null ? [] : [{ picture: each, reference, clip: { left, right } }];
    if (compare === 'partner') return layer(partner ?? picture, 0, width);
    if (compare === 'beside' || partner === null) return layer(picture, 0, width);
    const split = Math.round(width * scene.divider);
    return [...layer(picture, 0, split), ...layer(partner, split, width)];
  }

  #tell(gesture: StageGesture): void {
    this.dispatchEvent(new CustomEvent<StageGesture>('gesture', { detail: gesture, bubbles: true, composed: true }));
  }

  /** The point of the picture under the pointer, in shares; tiles repeat it. */
  #shareAt(event: MouseEvent): [number, number] {
    const { scene, placement } = this;
    const box = this.getBoundingClientRect();
    const ratio = this.#frame.width / box.width;
    const { width, height } = scene!.extent;
    const u = ((event.clientX - box.left) * ratio - placement.left) / (width * placement.zoom);
    const v = ((event.clientY - box.top) * ratio - placement.top) / (height * placement.zoom);
    return scene!.tiles ? [u - Math.floor(u), v - Math.floor(v)] : [u, v];
  }

  #point(event: PointerEvent): void {
    const { scene } = this;
    if (scene === null) return;
    const drag = this.#drag;
    const [u, v] = this.#shareAt(event);
    if (drag === null) {
      if (u >= 0 && u < 1 && v >= 0 && v < 1) this.#tell({ kind: 'point', u, v });
      return;
    }
    if (scene.draws) {
      this.#tell({ kind: 'draw', line: { from: drag.from, to: [clamped(u), clamped(v)] } });
      return;
    }
    const ratio = this.#frame.width / this.getBoundingClientRect().width;
    const { zoom } = this.placement;
    this.#tell({
      kind: 'pan',
      x: clamped(drag.pan.x - ((event.clientX - drag.x) * ratio) / (scene.extent.width * zoom)),
      y: clamped(drag.pan.y - ((event.clientY - drag.y) * ratio) / (scene.extent.height * zoom)),
    });
  }

  #press(event: PointerEvent): void {
    const { scene } = this;
    if (scene === null || event.button !== 0) return;
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    const [u, v] = this.#shareAt(event);
    this.#drag = { x: event.clientX, y: event.clientY, pan: scene.pan, from: [clamped(u), clamped(v)] };
  }

  #release(): void {
    this.#drag = null;
  }

  #pin(event: MouseEvent): void {
    if (this.scene === null) return;
    const [u, v] = this.#shareAt(event);
    if (u >= 0 && u < 1 && v >= 0 && v < 1) this.#tell({ kind: 'pin', u, v });
  }

  #wheel(event: WheelEvent): void {
    if (!(event.ctrlKey || event.metaKey)) return;
    event.preventDefault();
    this.#step(event.deltaY < 0 ? 1 : -1);
  }

  #step(direction: 1 | -1): void {
    const { zoom } = this;
    const next = direction > 0 ? ZOOMS.find((each) => each > zoom) : [...ZOOMS].reverse().find((each) => each < zoom);
    if (next === undefined) return;
    const { scene } = this;
    if (scene?.cursor != null) {
      const { width, height } = scene.extent;
      this.#tell({ kind: 'pan', x: (scene.cursor.x + 0.5) / width, y: (scene.cursor.y + 0.5) / height });
    }
    this.#tell({ kind: 'zoom', zoom: next });
  }

  #key(event: KeyboardEvent): void {
    const { scene } = this;
    if (scene?.cursor == null || event.ctrlKey || event.metaKey || event.altKey) return;
    const step = event.shiftKey ? 8 : 1;
    const moves: Readonly<Record<string, readonly [number, number]>> = {
      ArrowLeft: [-step, 0],
      ArrowRight: [step, 0],
      ArrowUp: [0, -step],
      ArrowDown: [0, step],
    };
    const move = moves[event.key];
    if (move !== undefined) {
      const { width, height } = scene.extent;
      const x = Math.min(width - 1, Math.max(0, scene.cursor.x + move[0]));
      const y = Math.min(height - 1, Math.max(0, scene.cursor.y + move[1]));
      const [u, v] = [(x + 0.5) / width, (y + 0.5) / height];
      this.#tell({ kind: 'point', u, v });
      if (!this.#inFrame(x, y)) this.#tell({ kind: 'pan', x: u, y: v });
    } else if (event.key.toLowerCase() === 'p') {
      const { width, height } = scene.extent;
      this.#tell({ kind: 'pin', u: (scene.cursor.x + 0.5) / width, v: (scene.cursor.y + 0.5) / height });
    } else if (event.key === '+' || event.key === '=') this.#step(1);
    else if (event.key === '-') this.#step(-1);
    else if (event.key === '0') this.#tell({ kind: 'zoom', zoom: null });
    else if (event.key === '1') this.#tell({ kind: 'zoom', zoom: 1 });
    else return;
    event.preventDefault();
  }

  #inFrame(x: number, y: number): boolean {
    const { zoom, left, top } = this.placement;
    const [at, down] = [left + x * zoom, top + y * zoom];
    return at >= 0 && down >= 0 && at + zoom <= this.#frame.width && down + zoom <= this.#frame.height;
  }

  #holdDivider(event: PointerEvent): void {
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
  }

  #moveDivider(event: PointerEvent): void {
    if (!(event.currentTarget as Element).hasPointerCapture(event.pointerId)) return;
    const box = this.getBoundingClientRect();
    this.#tell({ kind: 'divide', share: clamped((event.clientX - box.left) / box.width) });
  }

  #keyDivider(event: KeyboardEvent): void {
    const steps: Readonly<Record<string, number>> = { ArrowLeft: -0.02, ArrowRight: 0.02, Home: -1, End: 1 };
    const step = steps[event.key];
    if (step === undefined || this.scene === null) return;
    event.preventDefault();
    this.#tell({ kind: 'divide', share: clamped(this.scene.divider + step) });
  }
}

customElements.define('print-stage', PrintStage);

/** Everything that the print's own pixels hang on, so that a moved cursor does not paint it anew. */
function paintInputs(scene: Scene, placement: Placement, frame: Extent, ratio: number): readonly unknown[] {
  const { view, compare } = scene;
  return [
    scene.picture,
    view.show === 'difference' ? scene.reference : null,
    compare === 'beside' ? null : scene.partner,
    compare,
    compare === 'divider' ? scene.divider : 0,
    scene.extent.width,
    scene.extent.height,
    ...Object.values(placement),
    frame.width,
    frame.height,
    ratio,
    view.show,
    view.metric,
    view.blend,
    view.passing,
    view.normalY,
    view.show === 'lit' ? view.lamp : null,
    scene.backdrop,
    scene.magnify,
    scene.wrap.x,
    scene.wrap.y,
    scene.tiles,
  ];
}

function clamped(share: number): number {
  return Math.min(1, Math.max(0, share));
}

function sameExtent(one: Extent, other: Extent): boolean {
  return one.width === other.width && one.height === other.height;
}

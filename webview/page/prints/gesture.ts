import type { State } from '../state/state.ts';
import type { StageGesture } from './print-stage.ts';

/** What every page with prints keeps of how they are looked at. */
type Look = Pick<State, 'cursor' | 'pan' | 'zoom' | 'divider'>;

/** What a gesture on a print changes, on every page alike; null where it is a page's own affair. */
export function afterGesture(gesture: StageGesture): Partial<Look> | null {
  switch (gesture.kind) {
    case 'point':
      return { cursor: { u: gesture.u, v: gesture.v } };
    case 'pan':
      return { pan: { x: gesture.x, y: gesture.y } };
    case 'zoom':
      return { zoom: gesture.zoom };
    case 'divide':
      return { divider: gesture.share };
    case 'pin':
    case 'draw':
      return null;
  }
}

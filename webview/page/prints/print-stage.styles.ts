import { css } from 'lit';

export const stageStyles = css`
  :host {
    display: block;
    position: relative;
    min-height: 0;
    background: var(--proof-panel);
    overflow: hidden;
  }
  .hold {
    position: absolute;
    inset: 0;
    cursor: crosshair;
    touch-action: none;
  }
  .hold:focus-visible {
    outline-offset: -1px;
  }
  canvas {
    position: absolute;
    left: 0;
    top: 0;
    width: 100%;
    height: 100%;
    display: block;
  }
  .over {
    pointer-events: none;
  }
  .divider {
    position: absolute;
    top: 0;
    bottom: 0;
    left: var(--divider);
    width: 13px;
    margin-left: -6px;
    padding: 0;
    border: 0;
    background: transparent;
    cursor: ew-resize;
    height: auto;
    touch-action: none;
  }
  .divider::before {
    content: '';
    position: absolute;
    left: 5px;
    top: 0;
    bottom: 0;
    width: 3px;
    background: var(--proof-text);
    border: 1px solid var(--proof-ground);
    border-width: 0 1px;
  }
  .divider:focus-visible {
    outline-offset: -1px;
  }
`;

import { css } from 'lit';

export const axisStyles = css`
  :host {
    display: block;
    position: relative;
    overflow: hidden;
  }
  .plot {
    position: relative;
  }
  svg {
    position: absolute;
    inset: 0;
    width: 100%;
    height: 100%;
    overflow: visible;
    font-family: var(--proof-mono);
    font-size: calc(var(--proof-font-size) * 0.85);
    user-select: none;
  }
  text {
    fill: var(--proof-text);
    text-anchor: middle;
  }
  text.name {
    paint-order: stroke;
    stroke: var(--proof-ground);
    stroke-width: 3px;
    text-anchor: start;
    fill: var(--proof-quiet);
    font-family: var(--proof-font);
  }
  text.here {
    font-weight: 700;
  }
  text.faint {
    fill: var(--proof-quiet);
  }
  .rail {
    stroke: var(--proof-strong-line);
  }
  .rule {
    stroke: var(--proof-line);
  }
  .tick {
    stroke: var(--proof-text);
  }
  .target {
    fill: var(--proof-text);
  }
  .typed {
    fill: var(--proof-ground);
    stroke: var(--proof-text);
  }
  .curve {
    fill: none;
    stroke: var(--proof-curve);
    stroke-width: 1.25;
    opacity: 0.85;
  }
  .point {
    fill: var(--proof-curve);
  }
  .limit {
    stroke: var(--proof-warning);
    stroke-dasharray: 4 3;
  }
  .beyond {
    fill: var(--proof-warning);
  }
  .sight line {
    stroke: var(--proof-accent);
    stroke-width: 1.5;
  }
  .sight path {
    fill: var(--proof-accent);
  }
  .stage {
    position: absolute;
    inset: 0;
    cursor: col-resize;
    touch-action: none;
  }
  .stage:focus-visible {
    outline-offset: -1px;
  }
  .thumb {
    position: absolute;
    image-rendering: pixelated;
    pointer-events: none;
  }
  .worst {
    position: absolute;
    width: 16px;
    height: 16px;
    margin: -8px 0 0 -8px;
    padding: 0;
    background: transparent;
    border: 0;
  }
  .worst:hover {
    background: transparent;
  }
  @media (forced-colors: active) {
    .curve,
    .rail,
    .tick {
      stroke: CanvasText;
    }
    .sight line {
      stroke: Highlight;
    }
    .sight path {
      fill: Highlight;
    }
  }
`;

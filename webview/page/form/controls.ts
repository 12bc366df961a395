import { css } from 'lit';

/** Buttons, fields and lists as all controls of the page have them. Colors are tokens of page.css. */
export const controls = css`
  :host {
    box-sizing: border-box;
    font-family: var(--proof-font);
    font-size: var(--proof-font-size);
    color: var(--proof-text);
  }
  *,
  *::before,
  *::after {
    box-sizing: inherit;
  }
  [hidden] {
    display: none !important;
  }
  button,
  select,
  input[type='text'],
  input[type='number'] {
    font: inherit;
    color: var(--proof-input-text);
    background: var(--proof-input);
    border: 1px solid var(--proof-input-line);
    border-radius: 2px;
    height: round(1.7em, 1px);
    padding: 0 6px;
    margin: 0;
  }
  select {
    padding: 0 2px;
    background: var(--proof-list);
    color: var(--proof-list-text);
    border-color: var(--proof-list-line);
  }
  input[type='text'],
  input[type='number'] {
    height: round(1.85em, 1px);
    font-family: var(--proof-mono);
    font-size: var(--proof-mono-size);
  }
  input[type='number'] {
    appearance: textfield;
  }
  input[type='number']::-webkit-inner-spin-button {
    display: none;
  }
  input[type='checkbox'] {
    margin: 0;
    width: 1.08em;
    height: 1.08em;
    accent-color: var(--proof-accent);
  }
  button {
    color: var(--proof-button-text);
    background: var(--proof-button);
    border-color: var(--proof-button-line);
    cursor: pointer;
    white-space: nowrap;
  }
  button:hover:not(:disabled) {
    background: var(--proof-button-hover);
  }
  button.main {
    color: var(--proof-main-text);
    background: var(--proof-main);
    border-color: var(--proof-main-line);
  }
  button.main:hover:not(:disabled) {
    background: var(--proof-main-hover);
  }
  button.plain {
    color: inherit;
    background: transparent;
    border-color: transparent;
  }
  button.plain:hover:not(:disabled) {
    background: var(--proof-hover);
  }
  button[aria-pressed='true'] {
    background: var(--proof-on);
    color: var(--proof-on-text);
    border-color: var(--proof-on-line);
    box-shadow: inset 0 -2px 0 var(--proof-on-line);
  }
  button:disabled {
    opacity: 0.55;
    cursor: default;
  }
  :focus-visible {
    outline: 1px solid var(--proof-focus);
    outline-offset: 1px;
  }
  label {
    display: inline-flex;
    align-items: center;
    gap: 5px;
    white-space: nowrap;
    flex-wrap: wrap;
    max-width: 100%;
  }
  select {
    max-width: 100%;
  }
  .number {
    font-family: var(--proof-mono);
    font-size: var(--proof-mono-size);
    font-variant-numeric: tabular-nums;
  }
  .quiet {
    color: var(--proof-quiet);
  }
  .heading {
    font-size: 0.82em;
    letter-spacing: 0.09em;
    text-transform: uppercase;
    color: var(--proof-quiet);
    font-weight: 600;
  }
  .unseen {
    position: absolute;
    width: 1px;
    height: 1px;
    overflow: hidden;
    clip-path: inset(50%);
    white-space: nowrap;
  }
`;

import { css } from 'lit';

export const cardStyles = css`
  :host {
    display: grid;
    grid-row: span 3;
    grid-template-rows: subgrid;
    min-width: 0;
    min-height: 0;
    border-right: 1px solid var(--proof-line);
    position: relative;
  }
  header {
    display: flex;
    align-items: center;
    gap: 6px;
    min-height: 2.3em;
    padding: 3px 6px 3px 10px;
    border-bottom: 1px solid var(--proof-line);
    flex-wrap: wrap;
  }
  :host([chosen])::before {
    content: '';
    position: absolute;
    left: 0;
    right: 0;
    top: 0;
    height: 2px;
    background: var(--proof-accent);
    z-index: 1;
  }
  .name {
    font-weight: 600;
    padding: 0;
    height: auto;
    border: 0;
    background: none;
    color: inherit;
  }
  .name[aria-pressed],
  .name:hover:not(:disabled) {
    background: none;
    color: inherit;
    border: 0;
    box-shadow: none;
  }
  .name:hover:not(:disabled) {
    text-decoration: underline;
  }
  .badge {
    font-size: 0.85em;
    padding: 0 5px;
    border: 1px solid var(--proof-strong-line);
    border-radius: 8px;
    color: var(--proof-quiet);
  }
  .param {
    color: var(--proof-quiet);
  }
  input.param-value {
    width: 3.9em;
    height: round(1.65em, 1px);
    padding: 0 4px;
    color: var(--proof-input-text);
  }
  select {
    height: round(1.55em, 1px);
    font-weight: 600;
    max-width: 9.3em;
  }
  .gap {
    flex: 1;
  }
  .remove {
    width: round(1.55em, 1px);
    height: round(1.55em, 1px);
    padding: 0;
    line-height: 1;
  }
  footer {
    padding: 4px 10px 5px;
    border-top: 1px solid var(--proof-line);
    display: flex;
    flex-wrap: wrap;
    gap: 0 12px;
    min-height: 2.1em;
    align-content: start;
  }
  footer.tall {
    min-height: 3.3em;
  }
  .figure b {
    font-weight: 400;
  }
  .over {
    color: var(--proof-warning);
  }
  .over::after {
    content: ' \u25b2';
    font-size: 0.75em;
  }
  .failed {
    color: var(--proof-error);
  }
  @media (max-width: 560px) {
    print-stage {
      min-height: 300px;
    }
  }
`;

import { css } from 'lit';

/** Cards beside each other, or below where there is little room. */
export const rowStyles = css`
  :host {
    display: grid;
    min-height: 0;
    min-width: 0;
  }
  .row {
    display: grid;
    grid-template-rows: auto minmax(220px, 1fr) auto;
    grid-auto-flow: column;
    grid-auto-columns: minmax(min(20em, 100%), 1fr);
    overflow-x: auto;
  }
  @media (max-width: 560px) {
    .row {
      grid-template-rows: none;
      grid-auto-flow: row;
      grid-auto-columns: auto;
      grid-auto-rows: auto;
    }
  }
`;

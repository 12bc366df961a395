/** How large text is on an element, 1 at the editor's usual 13 px: plots lay out their rows by it. */
export function textScale(element: Element): number {
  return Number.parseFloat(getComputedStyle(element).fontSize) / 13 || 1;
}

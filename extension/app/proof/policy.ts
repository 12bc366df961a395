/** What the page may do, as a Content-Security-Policy: run its own script and a worker that it makes from fetched code, compile
 *  the engine's kernels, load its own style, and nothing else: pixels come by message. `source` is where its files lie. */
export function pagePolicy(source: string, nonce: string): string {
  return [
    "default-src 'none'",
    `img-src ${source} blob: data:`,
    `style-src ${source}`,
    `font-src ${source}`,
    `script-src 'nonce-${nonce}' 'wasm-unsafe-eval'`,
    'worker-src blob:',
    `connect-src ${source}`,
  ].join('; ');
}

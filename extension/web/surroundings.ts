/** Base64 of as many random bytes, which nobody can guess. */
export function randomText(byteCount: number): string {
  return btoa(String.fromCharCode(...crypto.getRandomValues(new Uint8Array(byteCount))));
}

export function encodeUtf8(text: string): Uint8Array {
  return new TextEncoder().encode(text);
}

/** Calls once, after a while; disposing calls it off. */
export function after(milliseconds: number, act: () => void): { dispose(): void } {
  const timer = setTimeout(act, milliseconds);
  return { dispose: () => clearTimeout(timer) };
}

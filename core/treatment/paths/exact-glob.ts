/** A glob for this root-relative path. It matches that path alone, but that a few rare characters, which globs have no sure way
 *  to write, stand as `?`. */
export function exactGlob(path: string): string {
  return path.replace(/[*?{}()!"\\^$|]/g, '?').replace(/[[\]+]/g, (character) => `[${character}]`);
}

// Absolute "/"-separated paths: `/a/b`, `C:/a/b`, `//server/share/a`; the top is `/`, `C:/` or `//server/share`.

export function joinPath(folder: string, rest: string): string {
  if (rest === '') return folder;
  return folder.endsWith('/') ? `${folder}${rest}` : `${folder}/${rest}`;
}

/** The folder above; null at the top. */
export function parentPath(path: string): string | null {
  if (topOf(path) === path) return null;
  const slash = path.lastIndexOf('/');
  const parent = path.slice(0, slash);
  return parent === '' || /^[A-Za-z]:$/.test(parent) ? `${parent}/` : parent;
}

export function baseName(path: string): string {
  return path.slice(path.lastIndexOf('/') + 1);
}

/** `path` seen from `folder`, empty for the folder itself; null where it lies outside. */
export function pathBelow(folder: string, path: string): string | null {
  if (path === folder) return '';
  const start = folder.endsWith('/') ? folder : `${folder}/`;
  return path.startsWith(start) ? path.slice(start.length) : null;
}

/** `path`, absolute or relative to `folder`, as an absolute path without `.` and `..`, which stop at the top. */
export function resolvePath(folder: string, path: string): string {
  const whole = topOf(path) === null ? joinPath(folder, path) : path;
  const top = topOf(whole);
  if (top === null) throw new RangeError(`Expected an absolute path for folder but received ${folder}`);
  if (!oddName.test(whole)) return whole;
  const names: string[] = [];
  for (const name of whole.slice(top.length).split('/')) {
    if (name === '..') names.pop();
    else if (name !== '' && name !== '.') names.push(name);
  }
  return joinPath(top, names.join('/'));
}

/** An empty name, `.` or `..` somewhere, or a `/` at the end; the top has one, too. */
const oddName = /\/(?:\.{0,2}\/|\.{0,2}$)/;

function topOf(path: string): string | null {
  if (plainTop.test(path)) return '/';
  return /^(?:\/\/[^/]+\/[^/]+|[A-Za-z]:\/|\/)/.exec(path)?.[0] ?? null;
}

/** Nearly every path: begins with one `/`. */
const plainTop = /^\/(?!\/)/;

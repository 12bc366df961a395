// Absolute paths with "/" between the parts (`/a/b`, `C:/a/b`), as text: nothing here looks at a disk.

/** The folder of a path; a root is its own. */
export function parentOf(path: string): string {
  const cut = path.lastIndexOf('/');
  if (cut < 0) return path;
  const parent = path.slice(0, cut);
  return parent === '' || /^[a-zA-Z]:$/.test(parent) ? `${parent}/` : parent;
}

export function nameOf(path: string): string {
  return path.slice(path.lastIndexOf('/') + 1);
}

/** `path` below `folder`, its `.` and `..` taken out. An absolute `path` stands alone. */
export function join(folder: string, path: string): string {
  const whole = /^(?:[a-zA-Z]:)?\//.test(path) ? path : `${folder}/${path}`;
  const start = /^(?:[a-zA-Z]:)?\//.exec(whole)?.[0] ?? '';
  const parts: string[] = [];
  for (const part of whole.slice(start.length).split('/')) {
    if (part === '..') parts.pop();
    else if (part !== '.' && part !== '') parts.push(part);
  }
  return start + parts.join('/');
}

/** Whether `path` is `folder` or lies below it. */
export function isWithin(path: string, folder: string): boolean {
  return path === folder || path.startsWith(folder.endsWith('/') ? folder : `${folder}/`);
}

/** The way from `folder` to `path`, or `null` where they have no start in common (two drives). `.` for the folder itself. */
export function relative(folder: string, path: string): string | null {
  const from = partsOf(folder);
  const to = partsOf(path);
  if (from[0] !== to[0]) return null;
  let shared = 1;
  while (shared < from.length && shared < to.length && from[shared] === to[shared]) shared++;
  const way = [...Array.from({ length: from.length - shared }, () => '..'), ...to.slice(shared)];
  return way.length === 0 ? '.' : way.join('/');
}

function partsOf(path: string): string[] {
  const parts = path.split('/').filter((part, index) => index === 0 || part !== '');
  // Drive letters are the same in either case.
  return [parts[0].toLowerCase(), ...parts.slice(1)];
}

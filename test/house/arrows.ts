import type { Import } from './imports.ts';

/** Who may import whom: the plan of the house. */
interface Room {
  /** Start of the paths of its files. */
  readonly at: string;
  /** Starts of the paths it may import, itself among them. */
  readonly files: readonly string[];
  /** Packages it may import; `node:*` is Node's own. */
  readonly packages: readonly string[];
}

// The first room whose `at` a path starts with is its room. `main.ts` and `main.web.ts` are rooms of one file.
const ROOMS: readonly Room[] = [
  { at: 'core/', files: ['core/'], packages: ['ktx-parse', 'picomatch', 'jsonc-parser', 'fflate'] },
  { at: 'extension/cli/', files: ['core/', 'extension/cli/', 'extension/node/', 'package.json'], packages: ['node:*'] },
  { at: 'extension/node/', files: ['core/', 'extension/node/'], packages: ['node:*'] },
  { at: 'extension/web/', files: ['core/', 'extension/web/', 'webview/worker/'], packages: [] },
  { at: 'extension/app/', files: ['core/', 'extension/app/'], packages: ['vscode'] },
  { at: 'extension/main.ts', files: ['core/', 'extension/app/', 'extension/node/'], packages: ['vscode', 'node:*'] },
  { at: 'extension/main.web.ts', files: ['core/', 'extension/app/', 'extension/web/'], packages: ['vscode'] },
  { at: 'webview/page/', files: ['core/', 'webview/page/', 'webview/link/'], packages: ['lit'] },
  {
    at: 'webview/worker/',
    files: ['core/', 'webview/worker/', 'dist/engine.wasm'],
    packages: ['@noble/hashes'],
  },
  { at: 'webview/link/', files: ['core/', 'webview/link/'], packages: [] },
];

/** The only file that needs TextEncoder and so may know ktx-parse is this many. */
const KTX_PARSE_IMPORTERS = 1;

/** One sentence for each import that is against the plan, and for each file that is in no room of it. */
export function wrongArrows(imports: readonly Import[]): string[] {
  const ktxImporters = new Set(imports.filter((each) => /^ktx-parse($|\/)/.test(each.to)).map((each) => each.from));
  return [
    ...imports.flatMap(wrongArrow),
    ...(ktxImporters.size > KTX_PARSE_IMPORTERS
      ? [`ktx-parse is imported in one file, but in ${[...ktxImporters].sort().join(' and ')}`]
      : []),
  ];
}

/** A path's room in core: its first folder, or the file itself where it lies at core's top. */
function coreRoom(path: string): string {
  return path.split('/').slice(0, 2).join('/');
}

/** Rooms of core that load each other in a ring, each ring once, as `core/a -> core/b -> core/a`. */
export function roomCycles(imports: readonly Import[]): string[] {
  const next = new Map<string, Set<string>>();
  for (const { from, to, kind, erased } of imports) {
    if (kind !== 'file' || erased || !from.startsWith('core/') || coreRoom(from) === coreRoom(to)) continue;
    next.set(coreRoom(from), (next.get(coreRoom(from)) ?? new Set()).add(coreRoom(to)));
  }
  const rings = new Map<string, string>();
  const follow = (trail: readonly string[]): void => {
    const room = trail[trail.length - 1];
    const seen = trail.indexOf(room);
    if (seen < trail.length - 1) {
      const ring = trail.slice(seen);
      const key = [...new Set(ring)].sort().join(' ');
      if (!rings.has(key)) rings.set(key, ring.join(' -> '));
      return;
    }
    for (const each of next.get(room) ?? []) follow([...trail, each]);
  };
  for (const room of next.keys()) follow([room]);
  return [...rings.values()];
}

function wrongArrow({ from, to, kind }: Import): string[] {
  const room = ROOMS.find((each) => from.startsWith(each.at));
  if (room === undefined) return [`${from} is in no room of the plan`];
  if (kind === 'file') {
    if (!room.files.some((start) => to.startsWith(start))) return [`${from} imports ${to}: ${room.at} must not`];
    if (to === 'core/protocol.ts' && room.at === 'core/')
      return [`${from} imports ${to}: core must not know the protocol`];
    return [];
  }
  const allowed = room.packages.some((each) =>
    each === 'node:*' ? to.startsWith('node:') : to === each || to.startsWith(`${each}/`),
  );
  return allowed ? [] : [`${from} imports ${to}: ${room.at} must not`];
}

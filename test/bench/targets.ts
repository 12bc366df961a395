/** What the project set out to reach, each as a figure of one run. */
export interface Target {
  readonly id: string;
  readonly goal: string;
  readonly unit: 'x' | 's' | 'ms' | 'MiB' | 'MB' | 'ppm' | 'codes';
  readonly better: 'more' | 'less';
  /** Null where nothing was promised. */
  readonly target: number | null;
  readonly stretch: number | null;
}

export const targets: readonly Target[] = [
  more(
    'linear-1024',
    'Lanczos3 chain in linear light of 1024x1024, against sharp in linear light, one thread each',
    14,
    18,
  ),
  more('linear-4096', 'the same chain of 4096x4096, against sharp in linear light', 14, 18),
  more('code-1024', 'the same chain of 1024x1024, against sharp in code space, which does less work', 4, 5),
  more('code-4096', 'the same chain of 4096x4096, against sharp in code space', 2.3, 3),
  more('pica-1024', 'the same chain of 1024x1024, against pica in WebAssembly, code space', 7, 8),
  more('pica-4096', 'the same chain of 4096x4096, against pica', 7, 8),
  more('workers', 'build of one 4096x4096 PNG by two workers, against one', 1.6, 1.9),
  less(
    'phases',
    'x',
    'any size, ratio or wrap against 2:1 of a power of two by the same kernel: time a tap, the worst of the cases below',
    1.5,
    1.1,
  ),
  more(
    'build',
    'whole build of a 4096x4096 PNG to PNG levels, against sharp in linear light at equal output size',
    4,
    6.5,
  ),
  more('folder', 'folder of mixed textures by two workers, against sharp in linear light with two threads', 4, 6),
  less('unchanged', 's', 'second build of 10 000 textures of which none changed', 1, 0.3),
  less('one-changed', 's', 'build of 10 000 textures of which one changed', 1.3, 0.5),
  less('working-memory', 'MiB', 'working memory beside source and outputs, chain of 4096x4096, 8 bits', 2.5, null),
  less('peak', 'MB', 'peak resident memory of a 4096x4096 build, less bare Node and the encoded file', 100, 64),
  less('differing-8', 'ppm', 'codes of 8 bits that differ from double precision', 20, 10),
  less('differing-16', 'ppm', 'codes of 16 bits that differ from double precision', 3000, null),
  less('difference', 'codes', 'by how much, at most', 1, null),
  less('cold', 'ms', 'cold start to the first chain of 1024x1024: compile, tables, run', 15, 10),
  less('page-open', 'ms', 'a 2048x2048 PNG opened in the editor, to its first print', 300, 150),
  less('page-kernel', 'ms', 'another kernel, to its print', 100, 50),
  less('review', 's', 'review of 2 000 changed files, listed by ids and headers', null, null),
];

function more(id: string, goal: string, target: number, stretch: number): Target {
  return { id, goal, unit: 'x', better: 'more', target, stretch };
}

function less(id: string, unit: Target['unit'], goal: string, target: number | null, stretch: number | null): Target {
  return { id, goal, unit, better: 'less', target, stretch };
}

/** Whether a figure is on the right side of a mark. */
export function reaches({ better }: Target, measured: number, mark: number): boolean {
  return better === 'more' ? measured >= mark : measured <= mark;
}

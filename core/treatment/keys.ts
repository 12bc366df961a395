import { budgetFormats } from '../raster/gpu-format.ts';
import {
  choice,
  type Default,
  either,
  flag,
  group,
  type Key,
  list,
  number,
  record,
  type Shape,
  spread,
  text,
  whole,
} from './text/shape.ts';

// Every key of the settings file: type, unit, range, default and one sentence each.

/** The longest side that is read or written, in texels. */
export const MAX_SIDE = 16384;

/** The last level of the longest side: log2(16384). */
export const MAX_LEVEL = 14;

const side = whole('texels', 1, MAX_SIDE);
const pair = list(side, 2, 2);
const globs = either(text('glob'), list(text('glob'), 1, 1000));
const wrapMode = choice('clamp-to-edge', 'repeat', 'mirror-repeat', 'clamp-to-border');
const kernel: Shape = { kind: 'kernel' };

const targetName = key(
  'name',
  text('target-name'),
  byRule('the scale or extent'),
  'Takes the place of `{target}` in file names.',
);

/** A target as text, or as an object of one of three kinds. */
const target = either(
  text('target'),
  record(key('scale', number('factor', 1 / 1024, 64), required(), 'Factor per axis.'), targetName),
  record(key('extent', pair, required(), 'Width and height.'), targetName),
  record(
    key('cell', pair, required(), 'Width and height that the image is fitted into, centered, the rest transparent.'),
    targetName,
  ),
);

const bytes = whole('bytes', 1, Number.MAX_SAFE_INTEGER);

/** Keys of `defaults` and of each treatment, in the order that `explain` lists them. */
export const treatmentKeys: readonly Key[] = [
  key(
    'content',
    choice('color', 'normal', 'height', 'data'),
    byRule('`color`; with `channels`, the content of the first group'),
    'What the codes mean.',
  ),
  key(
    'channels',
    { kind: 'channels' },
    value(null),
    'Contents of a packed file by groups of channel letters, such as `{ "rg": "normal", "b": "roughness", "a": "data" }`.',
  ),
  key(
    'transfer',
    either(choice('srgb', 'linear'), list(choice('srgb', 'linear'), 1, 4)),
    byRule('`srgb` for color, `linear` for the rest'),
    'How codes stand for light, for all channels or one a channel; alpha that is opacity or mask is linear always.',
  ),
  key(
    'light',
    choice('linear', 'code'),
    value('linear'),
    'Whether kernels weigh linear light or the codes as they are.',
  ),
  key(
    'alpha',
    group(
      key(
        'use',
        choice('opacity', 'mask', 'data', 'none'),
        byRule('`opacity` for color, `data` for the rest'),
        'What alpha means.',
      ),
      key('cutoff', number('share', 0, 1), value(0.5), 'Alpha at which a mask passes.'),
      key('test', choice('>=', '>'), value('>='), 'How alpha is compared with the cutoff.'),
      key(
        'keepCoverage',
        flag,
        byRule('`true` for a mask, otherwise `false`'),
        'Scales alpha so that each level passes as much as level 0.',
      ),
      key(
        'store',
        choice('straight', 'premultiplied'),
        value('straight'),
        'How color is stored; premultiplied is for KTX2 alone.',
      ),
      key('weight', flag, value(true), 'Weighs color by alpha while filtering.'),
    ),
    inner(),
    'What alpha is and how it is treated.',
  ),
  key(
    'fill',
    choice('none', 'hidden', 'all'),
    byRule('`hidden` for opacity and mask, otherwise `none`'),
    'Gives texels of alpha 0 the color of their surroundings: below level 0, or everywhere.',
  ),
  key(
    'kernel',
    either(
      spread(['minify', 'magnify'], kernel),
      group(
        key(
          'minify',
          kernel,
          byRule('`kaiser` for color, `box` for the rest'),
          'Kernel for levels and smaller targets.',
        ),
        key('magnify', kernel, byRule('`kaiser` for color, `box` for the rest'), 'Kernel for larger targets.'),
      ),
    ),
    inner(),
    'Weighting function: a name, a name with parameters, or one for each direction.',
  ),
  key(
    'derive',
    choice('previous', 'base'),
    byRule('`base` for nearest, majority, detail and even, otherwise `previous`'),
    'Whether a level is made from the level before it or from level 0.',
  ),
  key(
    'wrap',
    either(
      spread(['x', 'y'], wrapMode),
      group(
        key('x', wrapMode, value('clamp-to-edge'), 'Left and right of the image.'),
        key('y', wrapMode, value('clamp-to-edge'), 'Above and below the image.'),
      ),
    ),
    inner(),
    'What kernels read beyond the edges.',
  ),
  key(
    'levels',
    either(
      choice('none'),
      group(
        key('first', whole('level', 0, MAX_LEVEL), value(0), 'First level that is written, counted from the source.'),
        key(
          'last',
          whole('level', 0, MAX_LEVEL),
          value(null),
          'Last level that is written; null is the last there is.',
        ),
      ),
    ),
    inner(),
    'Levels that are written; `"none"` writes targets alone, and level 0 alone to KTX2.',
  ),
  key(
    'targets',
    list(target, 0, 64),
    value([]),
    'Sizes made from level 0 beside the levels, as PNG: `"2x"`, `"48x48"`, or objects.',
  ),
  key(
    'grid',
    group(
      key('cell', pair, value(null), 'Width and height of a cell; without it there is no grid.'),
      key('gutter', whole('texels', 0, 1024), value(0), 'Texels round each cell that belong to it.'),
    ),
    inner(),
    'Cells of a sheet or an atlas, each filtered alone.',
  ),
  key('depth', choice('same', 8, 16), value('same'), 'Bits of a stored sample.'),
  key('outputs', list(choice('png', 'ktx2'), 1, 2), value(['png', 'ktx2']), 'File formats that are written.'),
  key(
    'name',
    text('output-pattern'),
    value(null),
    'Path of an output below `outDir` without its extension, from {path} {name} {level} {width} {height} {target}.',
  ),
  key(
    'ktx2',
    group(
      key('supercompress', choice('none', 'zlib'), value('none'), 'Lossless compression of each level.'),
      key(
        'format',
        choice('same', 'wide'),
        value('wide'),
        'Whether 8-bit gray and RGB color keep their channels or are widened to RGBA.',
      ),
    ),
    inner(),
    'How KTX2 files are written.',
  ),
  key(
    'normal',
    group(
      key(
        'count',
        choice(2, 3),
        byRule('`3`; with `channels`, the letters of the normal group'),
        'Channels that hold the normal; of two, z is rebuilt.',
      ),
      key('y', choice('up', 'down'), value('up'), 'Where green points; it affects the lit view alone.'),
      key(
        'base',
        choice('keep', 'renormalise'),
        value('keep'),
        'Whether level 0 keeps its codes or is brought to unit length.',
      ),
      key(
        'roughness',
        either(
          number('share', 0, 1),
          group(
            key(
              'path',
              text('source-pattern'),
              value(null),
              'Roughness map of the same surface, relative to this file; may use {path} and {name}.',
            ),
            key('channel', choice('r', 'g', 'b', 'a'), value('g'), 'Channel that holds it.'),
          ),
        ),
        value(null),
        'Roughness that takes up the spread of the normals: one for the surface, or a map.',
      ),
    ),
    inner(),
    'How normal maps are treated.',
  ),
  key(
    'height',
    group(key('minmax', flag, value(false), 'Writes chains of the least and the greatest height too.')),
    inner(),
    'How height maps are treated.',
  ),
  key(
    'png',
    group(key('base', flag, value(false), 'Writes level 0 also where its codes equal the source.')),
    inner(),
    'How PNG files are written.',
  ),
  key(
    'colorChunks',
    choice('ignore', 'obey'),
    value('ignore'),
    'Whether the color chunks of a PNG change what its codes mean.',
  ),
  key(
    'view',
    group(
      key(
        'texelsPerMeter',
        number('texels per meter', 1e-6, 1e9),
        value(null),
        'Texels of level 0 per meter of surface.',
      ),
      key('fovY', number('degrees', 1, 179), value(60), 'Vertical field of view.'),
      key('screenHeight', whole('pixels', 1, 65536), value(1080), 'Height of the screen.'),
      key('blend', choice('linear', 'code'), value('linear'), 'Whether backdrops blend in linear light or in codes.'),
    ),
    inner(),
    'How the texture will be looked at.',
  ),
  key(
    'limits',
    group(
      key('thinning', number('share', 0, 1), value(null), 'Largest loss of coverage against level 0.'),
      key('halo', number('codes', 0, 255), value(null), 'Worst overshoot, in 8-bit codes.'),
      key(
        'over-budget',
        either(
          spread(['bytes'], bytes),
          group(
            key('bytes', bytes, value(null), 'Most bytes that the chain may take.'),
            key('format', choice(...budgetFormats), value('written'), 'GPU format that it is counted in.'),
          ),
        ),
        inner(),
        'Budget of the chain on the GPU.',
      ),
    ),
    inner(),
    'Findings above these fail `check`.',
  ),
  key(
    'review',
    group(
      key(
        'coverageLoss',
        number('share', 0, 1),
        value(null),
        'Largest loss of coverage at any size, against the same size before.',
      ),
      key(
        'lightChange',
        number('share', 0, 1000),
        value(null),
        'Largest change of mean luminance at any size, against the same size before.',
      ),
      key(
        'texelLoss',
        number('share', 0, 1),
        value(null),
        'Largest loss of texels; half the width and height is 0.75.',
      ),
      key('fileGrowth', number('share', 0, 1000), value(null), 'Largest growth of the file; twice its size is 1.'),
      key(
        'memoryGrowth',
        whole('bytes', 0, Number.MAX_SAFE_INTEGER),
        value(null),
        'Most bytes that the levels may grow by on the GPU.',
      ),
      key('harm', choice('report', 'fail'), value('report'), 'Whether any harm that is found fails `review`.'),
    ),
    inner(),
    'Changes above these fail `review`; they are no part of how a texture is built.',
  ),
];

/** Keys of an entry of `treatments`. */
export const ruleKeys: readonly Key[] = [
  key(
    'match',
    globs,
    required(),
    'Globs of the textures that this treatment applies to; later treatments win, key by key.',
  ),
  ...treatmentKeys,
];

/** Keys of the file itself. */
export const fileKeys: readonly Key[] = [
  key('$schema', text('any'), value(null), 'Where editors find the schema; not read.'),
  key(
    'outDir',
    text('folder'),
    value('built'),
    'Folder of the outputs, relative to this file; `.` puts them beside their sources.',
  ),
  key('exclude', list(text('glob'), 0, 1000), value([]), 'Globs of files that are no textures to build.'),
  key('defaults', group(...treatmentKeys), inner(), 'Settings of every texture.'),
  key('treatments', list(group(...ruleKeys), 0, 10000), value([]), 'Settings by glob.'),
];

/** The built-in value of a treatment's leaf, by its dotted path; its default must not depend on other keys. */
export function standard<T>(path: string): T {
  const found = constants.get(path);
  if (found === undefined) throw new TypeError(`Expected a key with a constant default but received ${path}`);
  return found.value as T;
}

/** Dotted paths of every key below `keys`, groups before their own keys. */
export function walkKeys(keys: readonly Key[], prefix = ''): readonly { readonly path: string; readonly key: Key }[] {
  return keys.flatMap((each) => {
    const path = `${prefix}${each.name}`;
    return [{ path, key: each }, ...innerKeys(each.shape).flatMap((inside) => walkKeys([inside], `${path}.`))];
  });
}

const constants = new Map(
  walkKeys(treatmentKeys).flatMap(({ path, key: each }) =>
    each.default.kind === 'value' ? [[path, each.default] as const] : [],
  ),
);

function innerKeys(shape: Shape): readonly Key[] {
  if (shape.kind === 'group') return shape.keys;
  return shape.kind === 'either' ? shape.options.flatMap(innerKeys) : [];
}

function key(name: string, shape: Shape, fallback: Default, says: string): Key {
  return { name, shape, default: fallback, says };
}

function value(constant: unknown): Default {
  return { kind: 'value', value: constant };
}

function byRule(words: string): Default {
  return { kind: 'rule', words };
}

function required(): Default {
  return { kind: 'required' };
}

function inner(): Default {
  return { kind: 'inner' };
}

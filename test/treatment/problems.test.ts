import { describe, expect, test } from 'vitest';
import { say } from '../../core/problem.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { type Code, words } from '../../core/words.ts';

type Row = readonly [text: string, ...expected: readonly `${number}:${number} ${Code}`[]];

/** Text of a settings file, and every problem it has, with the place from 1 in UTF-16 units. */
function check(rows: readonly Row[]): void {
  test.each(rows.map((row) => [row[0], row] as const))('%s', (_, [text, ...expected]) => {
    const { settings, problems } = parseSettings(text, 'sizeproof.json');
    expect(problems.map(({ line, column, code }) => `${line}:${column} ${code}`)).toEqual(expected);
    expect(settings === null).toBe(expected.length > 0);
    for (const problem of problems) {
      expect(problem.path).toBe('sizeproof.json');
      const needed = Array.from(words[problem.code].matchAll(/\{(\w+)\}/g), (found) => found[1]);
      for (const name of needed) expect(problem.values).toHaveProperty(name);
      expect(say(problem)).not.toMatch(/undefined|NaN|\[object/);
    }
  });
}

/** One treatment that hits everything. */
function rule(keys: string): string {
  return `{"treatments":[{"match":"**",${keys}}]}`;
}

// Columns of rule() are counted from its prefix, `{"treatments":[{"match":"**",`, which is 29 units long.

describe('texts that are not JSON with comments', () => {
  check([
    ['{}'],
    ['// nothing\n{ /* here */ }'],
    ['{"exclude":["a",],}'],
    ['\ufeff{}'],
    ['', '1:1 settings-syntax'],
    ['{', '1:2 settings-syntax'],
    ['{"outDir" "x"}', '1:11 settings-syntax'],
    ['{"outDir":}', '1:11 settings-syntax'],
    ['{"outDir":"x" "exclude":[]}', '1:15 settings-syntax'],
    ['{"outDir":"x"}}', '1:15 settings-syntax'],
    ['{\r\n  "outDir": "x\r\n}', '2:13 settings-syntax'],
    ['{"outDir":"\\q"}', '1:11 settings-syntax'],
    ['{"outDir":01}', '1:12 settings-syntax'],
    [`{"exclude":${'['.repeat(100000)}`, '1:75 settings-syntax'],
    ['[]', '1:1 wrong-type'],
    ['null', '1:1 wrong-type'],
  ]);
});

describe('keys', () => {
  check([
    ['{"outdir":"x"}', '1:2 unknown-key'],
    ['{"__proto__":{}}', '1:2 unknown-key'],
    ['{"constructor":1}', '1:2 unknown-key'],
    ['{"$schema":"./x.json"}'],
    ['{"outDir":"a","outDir":"b"}', '1:15 duplicate-key'],
    ['{\n\t"defaults": {\n\t\t"alpha": { "cutof": 1 }\n\t}\n}', '3:14 unknown-key'],
    ['{\r\n"defaults":{\r"lite":1}}', '3:1 unknown-key'],
    ['{"a\u{1F343}":1,"b":2}', '1:2 unknown-key', '1:10 unknown-key'],
    ['{"treatments":[{"content":"data"}]}', '1:16 missing-key'],
    ['{"treatments":[{"match":null}]}', '1:25 wrong-type'],
    ['{"defaults":{"match":"**"}}', '1:14 unknown-key'],
    [rule('"limits":{"fringe":1}'), '1:40 unknown-key'],
    [rule('"outDir":"x"'), '1:30 unknown-key'],
  ]);

  test.each([
    ['{"outdir":"x"}', 'outDir'],
    ['{"excludes":[]}', 'exclude'],
    [rule('"trasnfer":"srgb"'), 'transfer'],
    [rule('"kernel":{"minfy":"box"}'), 'minify'],
    [rule('"kernel":{"name":"keys","b":0}'), 'a'],
    [rule('"targets":[{"exten":[1,1]}]'), 'extent'],
    [rule('"targets":[{"cells":[1,1]}]'), 'cell'],
    [rule('"limits":{"over-budget":{"byte":1}}'), 'bytes'],
    [rule('"normal":{"roughness":{"chanel":"r"}}'), 'channel'],
  ])('%s: the nearest key is %s', (text, nearest) => {
    const { problems } = parseSettings(text, 'sizeproof.json');
    expect(problems.map(({ code, values }) => [code, values.nearest])).toEqual([['unknown-key', nearest]]);
  });
});

describe('types, ranges and choices', () => {
  check([
    ['{"outDir":1}', '1:11 wrong-type'],
    ['{"exclude":"x"}', '1:12 wrong-type'],
    ['{"exclude":[1]}', '1:13 wrong-type'],
    ['{"defaults":[]}', '1:13 wrong-type'],
    ['{"treatments":{}}', '1:15 wrong-type'],
    ['{"treatments":[7]}', '1:16 wrong-type'],
    [rule('"content":"colour"'), '1:40 bad-choice'],
    [rule('"content":7'), '1:40 wrong-type'],
    [rule('"depth":12'), '1:38 bad-choice'],
    [rule('"depth":"8"'), '1:38 bad-choice'],
    [rule('"alpha":"mask"'), '1:38 wrong-type'],
    [rule('"alpha":{"cutoff":-0.1}'), '1:48 out-of-range'],
    [rule('"alpha":{"cutoff":"0.5"}'), '1:48 wrong-type'],
    [rule('"alpha":{"weight":1}'), '1:48 wrong-type'],
    [rule('"levels":"all"'), '1:39 bad-choice'],
    [rule('"levels":{"first":1.5}'), '1:48 out-of-range'],
    [rule('"levels":{"last":15}'), '1:47 out-of-range'],
    [rule('"outputs":[]'), '1:40 out-of-range'],
    [rule('"outputs":["jpg"]'), '1:41 bad-choice'],
    [rule('"grid":{"cell":[16]}'), '1:45 out-of-range'],
    [rule('"grid":{"cell":[16,0]}'), '1:49 out-of-range'],
    [rule('"transfer":["srgb","gamma"]'), '1:49 bad-choice'],
    [rule('"limits":{"halo":256}'), '1:47 out-of-range'],
    [rule('"limits":{"thinning":2}'), '1:51 out-of-range'],
    [rule('"limits":{"over-budget":0}'), '1:54 out-of-range'],
    [rule('"limits":{"over-budget":{"bytes":1,"format":"bc2"}}'), '1:74 bad-choice'],
    [rule('"view":{"fovY":1e999}'), '1:45 out-of-range'],
    [rule('"view":{"fovY":0}'), '1:45 out-of-range'],
    [rule('"normal":{"roughness":1.5}'), '1:52 out-of-range'],
    [rule('"normal":{"roughness":"a.png"}'), '1:52 wrong-type'],
    [rule('"normal":{"count":4}'), '1:48 bad-choice'],
    [rule('"alpha":{"use":null,"cutoff":null},"kernel":null,"levels":{"first":null}')],
    ['{"outDir":null,"exclude":null,"defaults":null,"treatments":null}'],
  ]);
});

describe('kernels', () => {
  check([
    [rule('"kernel":"lanczos"'), '1:39 bad-choice'],
    [rule('"kernel":3'), '1:39 wrong-type'],
    [rule('"kernel":{"a":-0.5}'), '1:39 missing-key'],
    [rule('"kernel":{"name":7}'), '1:47 wrong-type'],
    [rule('"kernel":{"name":"keys","a":0.5}'), '1:58 out-of-range'],
    [rule('"kernel":{"name":"keys","a":"x"}'), '1:58 wrong-type'],
    [rule('"kernel":{"name":"detail","lambda":0.7}'), '1:65 out-of-range'],
    [rule('"kernel":{"name":"detail","lambda":2}')],
    [rule('"kernel":{"name":"keys","a":-1,"a":-1}'), '1:61 duplicate-key'],
    [rule('"kernel":{"minify":"box","magnify":"nearest"}')],
    [rule('"kernel":{"minify":{"name":"gaussian","sigma":0.2}}'), '1:76 out-of-range'],
    [rule('"kernel":{"magnify":"detail"}'), '1:40 kernel-direction'],
    [rule('"kernel":{"minify":"epx"}'), '1:40 kernel-direction'],
    // One name for both directions: only what something asks for must be possible.
    [rule('"kernel":"detail"')],
    [rule('"kernel":"detail","targets":["0.5x","1x","48x48"]')],
    [rule('"kernel":"detail","targets":["2x"]'), '1:30 kernel-direction'],
    [rule('"kernel":"epx"'), '1:30 kernel-direction'],
    [rule('"kernel":"epx","levels":"none","targets":["2x","6x","48x48"]')],
    [rule('"kernel":"epx","levels":{"last":0},"targets":["4x"]')],
    [rule('"kernel":"epx","levels":"none","targets":["0.5x"]'), '1:30 kernel-direction'],
    [rule('"kernel":"epx","levels":"none","targets":["5x"]'), '1:30 kernel-scale'],
    [rule('"kernel":"epx","levels":"none","targets":["2.5x"]'), '1:30 kernel-scale'],
  ]);

  test('a kernel that cannot names one that can', () => {
    const { problems } = parseSettings(rule('"content":"height","kernel":"monotone"'), 'sizeproof.json');
    expect(problems.map(({ values }) => values.instead)).toEqual(['box']);
  });
});

describe('targets', () => {
  check([
    [rule('"targets":["1x","2x","0.75x","48x48",{"cell":[48,32],"name":"card"}]')],
    [rule('"targets":["0x"]'), '1:41 out-of-range'],
    [rule('"targets":["65x"]'), '1:41 out-of-range'],
    [rule('"targets":["2"]'), '1:41 out-of-range'],
    [rule('"targets":["48x16385"]'), '1:41 out-of-range'],
    [rule('"targets":[2]'), '1:41 wrong-type'],
    [rule('"targets":[{}]'), '1:41 missing-key'],
    [rule('"targets":[{"scale":2,"extent":[1,1]}]'), '1:52 unknown-key'],
    [rule('"targets":[{"scale":2,"name":"7"}]'), '1:59 bad-target-name'],
    [rule('"targets":[{"scale":2,"name":"a/b"}]'), '1:59 bad-target-name'],
    [rule('"targets":[{"scale":2,"name":"a:b"}]'), '1:59 bad-target-name'],
    [rule('"targets":[{"scale":2,"name":""}]'), '1:59 bad-target-name'],
    [rule('"targets":["2x",{"scale":3,"name":"2X"}]'), '1:30 target-twice'],
    [rule('"targets":["48x48",{"cell":[48,48]}]'), '1:30 target-twice'],
  ]);
});

describe('channels', () => {
  check([
    [rule('"channels":{"rg":"normal","b":"roughness","a":"data"}')],
    [rule('"channels":{"rgb":"color","a":"data"}')],
    [rule('"channels":{"rgba":"data"}')],
    [rule('"channels":{}'), '1:41 out-of-range'],
    [rule('"channels":{"br":"data"}'), '1:42 channel-group'],
    [rule('"channels":{"rr":"data"}'), '1:42 channel-group'],
    [rule('"channels":{"x":"data"}'), '1:42 channel-group'],
    [rule('"channels":{"rg":"data","gb":"data"}'), '1:54 channel-shared'],
    [rule('"channels":{"r":"normal"}'), '1:42 channel-count'],
    [rule('"channels":{"rgba":"normal"}'), '1:42 channel-count'],
    [rule('"channels":{"rg":"normal","ba":"roughness"}'), '1:56 channel-count'],
    [rule('"channels":{"rg":"normal","ba":"normal"}'), '1:56 content-twice'],
    [rule('"channels":{"r":"roughness"}'), '1:41 roughness-alone'],
    [rule('"channels":{"r":"gloss"}'), '1:46 bad-choice'],
    [rule('"channels":{"r":1}'), '1:46 wrong-type'],
  ]);
});

describe('paths and globs', () => {
  check([
    ['{"outDir":"."}'],
    ['{"outDir":"a/./b/"}'],
    ['{"outDir":""}', '1:11 out-of-range'],
    ['{"outDir":"../x"}', '1:11 leaves-root'],
    ['{"outDir":"a/../b"}', '1:11 leaves-root'],
    ['{"outDir":"/x"}', '1:11 leaves-root'],
    ['{"outDir":"C:x"}', '1:11 leaves-root'],
    ['{"outDir":"a\\\\b"}', '1:11 leaves-root'],
    ['{"exclude":["..a/**","a..b","**/*.tga"]}'],
    ['{"exclude":["a","b\\\\c"]}', '1:17 leaves-root'],
    ['{"exclude":["[a"]}', '1:13 bad-glob'],
    ['{"exclude":["{a,b"]}', '1:13 bad-glob'],
    ['{"exclude":[""]}', '1:13 bad-glob'],
    ['{"exclude":["!a"]}', '1:13 bad-glob'],
    ['{"exclude":["+(a|b)"]}', '1:13 bad-glob'],
    ['{"exclude":["[!a]"]}', '1:13 bad-glob'],
    ['{"exclude":["{1..3}"]}', '1:13 bad-glob'],
    ['{"exclude":["*a*a*a*b"]}', '1:13 bad-glob'],
    ['{"exclude":["**/a/**/b/**/*_*_*.*"]}', '1:13 bad-glob'],
    ['{"treatments":[{"match":[]}]}', '1:25 out-of-range'],
    ['{"treatments":[{"match":["a","../b"]}]}', '1:30 leaves-root'],
    [rule('"name":"{path}/x/{name}.{level}"')],
    [rule('"name":"../{name}.{level}"'), '1:37 leaves-root'],
    [rule('"name":"{nam}.{level}"'), '1:37 unknown-placeholder'],
    [rule('"name":"{name}.{level"'), '1:37 unknown-placeholder'],
    [rule('"name":"{path}/"'), '1:37 out-of-range'],
    [rule('"content":"normal","normal":{"roughness":{"path":"{path}/{name}_r.png"}}')],
    [rule('"content":"normal","normal":{"roughness":{"path":"{level}.png"}}'), '1:79 unknown-placeholder'],
  ]);
});

describe('rules between keys', () => {
  const ktx2 = '"outputs":["ktx2"]';
  check([
    [rule('"alpha":{"store":"premultiplied"}'), '1:39 premultiplied-png'],
    [rule(`"alpha":{"store":"premultiplied"},${ktx2}`)],
    [rule(`"alpha":{"use":"mask","store":"premultiplied"},${ktx2}`), '1:52 coverage-premultiplied'],
    [rule(`"alpha":{"use":"mask","store":"premultiplied","keepCoverage":false},${ktx2}`)],
    [rule(`"alpha":{"use":"data","store":"premultiplied"},${ktx2}`), '1:52 premultiplied-use'],
    [rule('"alpha":{"keepCoverage":true}'), '1:39 coverage-use'],
    [rule('"alpha":{"keepCoverage":true,"use":"mask"}')],
    [rule('"wrap":"clamp-to-border"')],
    [rule('"content":"data","wrap":"clamp-to-border"'), '1:47 border-use'],
    [rule('"content":"data","wrap":{"y":"clamp-to-border"}'), '1:55 border-use'],
    [rule('"channels":{"rgb":"color","a":"data"},"alpha":{"use":"mask"}'), '1:77 alpha-in-group'],
    [rule('"content":"normal","transfer":"srgb"'), '1:49 normal-transfer'],
    [rule('"content":"normal","transfer":["linear","linear","srgb"]'), '1:49 normal-transfer'],
    [rule('"channels":{"rg":"normal","b":"color"},"transfer":["linear","linear","srgb"]')],
    [rule('"channels":{"rg":"normal"},"normal":{"count":3}'), '1:67 normal-count'],
    [rule('"channels":{"rg":"normal","b":"roughness"},"normal":{"roughness":0.5}'), '1:83 roughness-twice'],
    [rule('"normal":{"roughness":{"channel":"r"}}'), '1:53 roughness-pathless'],
    [rule('"levels":{"first":3,"last":2}'), '1:40 levels-order'],
    [rule(`"targets":["2x"],${ktx2}`), '1:30 targets-png'],
    [rule('"content":"data","targets":[{"cell":[8,8]}]'), '1:47 cell-use'],
    [rule('"grid":{"cell":[8,8]},"targets":["2x"]')],
    [rule('"grid":{"cell":[8,8]},"targets":["48x48"]'), '1:52 grid-scale'],
    [rule('"name":"{path}/{name}"'), '1:30 name-lacks'],
    [rule(`"name":"{path}/{name}",${ktx2}`)],
    [rule('"name":"{name}","levels":"none"')],
    ['{"outDir":".","defaults":{"name":"mips/{name}.{level}"}}', '1:27 name-beside'],
    ['{"outDir":"./","defaults":{"name":"{path}/{name}/{level}"}}', '1:28 name-beside'],
    ['{"outDir":".","defaults":{"name":"{path}/{level}.{name}"}}'],
    [rule('"name":"{name}","levels":"none","targets":["2x"]'), '1:30 name-lacks'],
    [rule('"name":"{name}.{level}","targets":["2x"]'), '1:30 name-lacks'],
    // In `defaults` too, and said once though every treatment has it.
    ['{"defaults":{"levels":{"first":3,"last":2}},"treatments":[{"match":"a"},{"match":"b"}]}', '1:24 levels-order'],
    // Another treatment could settle it: it is left to the textures.
    ['{"defaults":{"alpha":{"store":"premultiplied"}},"treatments":[{"match":"**","outputs":["ktx2"]}]}'],
    [`{"treatments":[{"match":"a","alpha":{"store":"premultiplied"}},{"match":"a",${ktx2}}]}`],
  ]);
});

test('several problems are reported at once, in the order of their places', () => {
  const text =
    '{\n "outdir": "x",\n "exclude": ["../a", 7],\n "defaults": { "alpha": { "cutof": 1, "use": "mak" } }\n}';
  const { problems } = parseSettings(text, 'a/sizeproof.json');
  expect(problems.map(({ path, line, column, code }) => `${path}:${line}:${column} ${code}`)).toEqual([
    'a/sizeproof.json:2:2 unknown-key',
    'a/sizeproof.json:3:14 leaves-root',
    'a/sizeproof.json:3:22 wrong-type',
    'a/sizeproof.json:4:27 unknown-key',
    'a/sizeproof.json:4:46 bad-choice',
  ]);
});

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { PNG } from 'pngjs';
import { expect, test } from 'vitest';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { top } from '../house/tree.ts';

// The walkthrough shows cuts of README's pictures, which are tested to be what they say, and lines of what the program says.

test.each([
  ['proof.png', 'leaf-sheet.png', 16, 346],
  ['build.png', 'leaf-levels.png', 0, 176],
] as const)('%s is a cut of %s', (name, whole, left, up) => {
  const cut = read('extension/walkthrough', name);
  const from = read('test/demo/picture', whole);
  const expected = new PNG({ width: cut.width, height: cut.height });
  PNG.bitblt(from, expected, left, up, cut.width, cut.height, 0, 0);
  expect(Buffer.compare(cut.data, expected.data)).toBe(0);
});

test('its settings are settings', () => {
  const text = readFileSync(join(top, 'extension/walkthrough/settings.md'), 'utf8');
  const [, json] = /```json\n(.*?)```/s.exec(text)!;
  expect(parseSettings(json, 'sizeproof.json').problems).toEqual([]);
});

test('what it says of the leaf is so', () => {
  const { settings } = parseSettings(readFileSync(join(top, 'test/demo/sizeproof.json'), 'utf8'), 'sizeproof.json');
  const { origins } = resolveTreatment(settings, 'foliage/alder-twig.png');
  const text = readFileSync(join(top, 'extension/walkthrough/explain.md'), 'utf8');
  const rows = [...text.matchAll(/^\| `([\w.]+)` \| `(.*)` \| `?([^`,|]*[^`,| ])`?(?:, line (\d+))? \|$/gm)];
  expect(rows.length).toBe(4);
  for (const [, key, value, rule, line] of rows) {
    const origin = origins.find((each) => each.key === key)!;
    expect([key, JSON.stringify(origin.value), origin.rule, origin.line]).toEqual([
      key,
      value,
      rule,
      line === undefined ? undefined : Number(line),
    ]);
  }
});

function read(folder: string, name: string): PNG {
  return PNG.sync.read(readFileSync(join(top, folder, name)));
}

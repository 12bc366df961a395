import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { base64 } from '../../core/export/base64.ts';
import { type CarriedBlock, documentOf } from '../../core/export/document.ts';
import { encodeUtf8 } from '../../core/treatment/paths/utf8.ts';
import { newHash } from '../../extension/node/ports/hash.ts';

const code = { script: 'document.title += "!";', worker: 'self.close();', style: 'body { margin: 0; }' };

function documentWith(blocks: readonly CarriedBlock[], more: Partial<typeof code> = {}, title = 'a.png'): string {
  return documentOf({ title, language: 'en', code: { ...code, ...more }, blocks }, newHash);
}

/** What an HTML parser makes of script elements: each ends at the first `</script`, and `<!--` may hide that end.
 *  [HTML, script data state] */
function scriptsOf(html: string): readonly { readonly tag: string; readonly text: string }[] {
  return [...html.matchAll(/<script([^>]*)>([\s\S]*?)<\/script\s*>/gi)].map(([, tag, text]) => ({ tag, text }));
}

describe('what a page carries', () => {
  const hostile = '</script><script>alert(1)</script><!-- <script> </SCRIPT >\u2028 é 😀';

  test('names and settings cannot end their block', () => {
    const html = documentWith([{ id: 'proof', json: { name: hostile, path: `${hostile}.png` } }]);
    const scripts = scriptsOf(html);
    expect(scripts).toHaveLength(3);
    const block = scripts.find(({ tag }) => tag.includes('id="proof"'))!;
    expect(block.text).not.toContain('<');
    expect(JSON.parse(block.text)).toEqual({ name: hostile, path: `${hostile}.png` });
  });

  test('a title is text', () => {
    const html = documentWith([], {}, '</title><script>alert(1)</script>');
    expect(scriptsOf(html)).toHaveLength(2);
    expect(html).not.toContain('</title><script');
  });

  test('code that speaks of its own end cannot end its element', () => {
    const script =
      'const end = "</script>", open = "<!-- <script>", tag = `</SCRIPT>`; globalThis.found = [end, open, tag];';
    const scripts = scriptsOf(documentWith([], { script, worker: script }));
    expect(scripts).toHaveLength(2);
    expect(JSON.parse(scripts[0].text)).toBe(script);
    const run = new Function('globalThis', scripts[1].text);
    const stage: { found?: unknown } = {};
    run(stage);
    expect(stage.found).toEqual(['</script>', '<!-- <script>', '</SCRIPT>']);
  });

  test('an id is a name, and there once', () => {
    expect(() => documentWith([{ id: 'a"><b', json: 1 }])).toThrow(RangeError);
    expect(() =>
      documentWith([
        { id: 'a', json: 1 },
        { id: 'a', json: 2 },
      ]),
    ).toThrow(RangeError);
  });

  test('bytes are base 64, as Node has it', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 20_000 }), (bytes) => {
        expect(base64(bytes)).toBe(Buffer.from(bytes).toString('base64'));
      }),
    );
    const bytes = Uint8Array.of(255, 0, 60, 47);
    const block = scriptsOf(documentWith([{ id: 'image', bytes }])).find(({ tag }) => tag.includes('id="image"'))!;
    expect(Buffer.from(block.text, 'base64')).toEqual(Buffer.from(bytes));
  });

  test('the same is made of the same', () => {
    const blocks = [{ id: 'proof', json: { a: [1, 'x'] } }];
    expect(documentWith(blocks)).toBe(documentWith(blocks));
  });
});

describe('the policy', () => {
  test('forbids every connection, and names script and style by their SHA-256, as Node counts it', () => {
    const script = 'const text = "é </script>";';
    const html = documentWith([], { script });
    const policy = /Content-Security-Policy" content="([^"]*)"/.exec(html)![1].replaceAll('&#39;', "'");
    const [, style] = /<style>([\s\S]*?)<\/style>/.exec(html)!;
    const hash = (text: string) => `'sha256-${createHash('sha256').update(text).digest('base64')}'`;
    const own = scriptsOf(html).at(-1)!.text;
    expect(policy.split('; ')).toEqual([
      "default-src 'none'",
      `script-src ${hash(own)} 'wasm-unsafe-eval'`,
      `style-src ${hash(style)}`,
      'worker-src blob:',
      "base-uri 'none'",
      "form-action 'none'",
    ]);
  });

  test('UTF-8 is as Node writes it', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (text) => {
        expect(Buffer.from(encodeUtf8(text))).toEqual(Buffer.from(text));
      }),
    );
    expect([...encodeUtf8('\ud800x')]).toEqual([0xef, 0xbf, 0xbd, 0x78]);
  });
});

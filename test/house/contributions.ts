import { mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { textBundle, textsIn } from './texts.ts';

// Writes what package.json refers to and code makes: the texts that translators start from. The build runs this from the top.
const sources = ['extension/app', 'webview/page'].flatMap((room) =>
  readdirSync(room, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.ts'))
    .map((name) => readFileSync(`${room}/${name}`, 'utf8')),
);

mkdirSync('dist/l10n', { recursive: true });
writeFileSync('dist/l10n/bundle.l10n.json', `${JSON.stringify(textBundle(sources.flatMap(textsIn)), null, 2)}\n`);

import { mkdirSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';

import { paintLeafLevels } from '../picture/leaf-levels.ts';
import { encodePiece, gallery } from './gallery.ts';
import { paintIcon } from './icon.ts';
import { encodePng } from './png.ts';

// Paints the demo's textures, and README's picture of one, into test/demo, and the extension's icon beside it all. Run from the top of the tree, by `npm run demo:paint`.

for (const piece of gallery) {
  const file = join('test', 'demo', piece.path);
  const bytes = encodePiece(piece);
  mkdirSync(dirname(file), { recursive: true });
  writeFileSync(file, bytes);
  console.log(`${file}  ${bytes.length} bytes`);
}

writeFileSync(join('test', 'demo', 'picture', 'leaf-levels.png'), encodePng(paintLeafLevels()));
writeFileSync('icon.png', encodePng(paintIcon()));

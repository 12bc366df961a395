import { readFileSync, writeFileSync } from 'node:fs';
import { schemaText } from '../../core/treatment/schema/schema.ts';
import { withSettings } from './readme.ts';

// Writes the settings file's JSON schema beside the code that it is made from, and README's tables of it; `npm run schema`
// runs this from the top.
writeFileSync('core/treatment/schema/sizeproof.schema.json', schemaText());
writeFileSync('README.md', withSettings(readFileSync('README.md', 'utf8')));

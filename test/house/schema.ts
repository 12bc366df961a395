import { writeFileSync } from 'node:fs';
import { schemaText } from '../../core/treatment/schema.ts';

// Writes the settings file's JSON schema beside the code that it is made from; `npm run schema` runs this from the top.
writeFileSync('core/treatment/sizeproof.schema.json', schemaText());

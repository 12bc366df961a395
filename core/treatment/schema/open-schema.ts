import { type JsonSchema, jsonSchema } from './schema.ts';

/** The schema for editors: it completes and explains, and accepts every text, since the parser's own problems say what is
 *  wrong, with places and repairs. Two complaints about one mistake would be one too many. */
export function openSchema(): JsonSchema {
  const { $schema, title, type: _, definitions, ...file } = jsonSchema();
  const opened = Object.entries(definitions as Readonly<Record<string, JsonSchema>>).map(
    ([name, schema]) => [name, open(schema)] as const,
  );
  return { $schema, title, ...loosened(file), definitions: Object.fromEntries(opened) };
}

/** Keywords that only ever refuse. */
const REFUSALS = new Set([
  'additionalProperties',
  'required',
  'minimum',
  'maximum',
  'minLength',
  'minItems',
  'maxItems',
  'minProperties',
  'pattern',
]);

/** Offers what the schema offers, and takes anything. What is said about a value stays outside, where a hover finds it. */
function open(schema: JsonSchema): JsonSchema {
  const { description, default: standard, ...rest } = loosened(schema);
  const said = {
    ...(description === undefined ? {} : { description }),
    ...(standard === undefined ? {} : { default: standard }),
  };
  const choices = Array.isArray(rest.anyOf) ? rest.anyOf : [rest];
  return { ...said, anyOf: [...choices, {}] };
}

function loosened(schema: JsonSchema): JsonSchema {
  const kept = Object.entries(schema).filter(([keyword]) => !REFUSALS.has(keyword));
  return Object.fromEntries(kept.map(([keyword, value]) => [keyword, inside(keyword, value)]));
}

function inside(keyword: string, value: unknown): unknown {
  switch (keyword) {
    case 'properties':
    case 'patternProperties': {
      const schemas = Object.entries(value as Readonly<Record<string, JsonSchema>>);
      return Object.fromEntries(schemas.map(([name, schema]) => [name, open(schema)]));
    }
    case 'items':
      return open(value as JsonSchema);
    case 'anyOf':
      return (value as readonly JsonSchema[]).map(loosened);
    default:
      return value;
  }
}

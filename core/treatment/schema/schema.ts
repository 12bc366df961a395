import { type Kernel, kernels } from '../../kernel/table.ts';
import { fileKeys } from '../keys.ts';
import { channelContents } from '../text/channels.ts';
import { extentText, scaleText } from '../text/grammar.ts';
import type { Grammar, Key, Shape } from '../text/shape.ts';
import { describeDefault } from './describe-default.ts';

export interface JsonSchema {
  readonly [keyword: string]: unknown;
}

/** The JSON schema (draft-07) of the settings file. Whatever the parser takes it takes too; rules between keys, globs and
 *  paths are the parser's alone. */
export function jsonSchema(): JsonSchema {
  return {
    $schema: 'http://json-schema.org/draft-07/schema#',
    title: 'Sizeproof settings',
    ...objectSchema(fileKeys, nullable),
    definitions: { kernel: kernelSchema() },
  };
}

/** The schema as the file beside this one holds it. */
export function schemaText(): string {
  return `${JSON.stringify(jsonSchema(), null, 2)}\n`;
}

type Wrapping = (schema: JsonSchema) => JsonSchema;

function objectSchema(keys: readonly Key[], wrapping: Wrapping): JsonSchema {
  const properties = Object.fromEntries(keys.map((key) => [key.name, keySchema(key, wrapping)]));
  const required = keys.filter((key) => key.default.kind === 'required').map((key) => key.name);
  return { type: 'object', additionalProperties: false, ...(required.length > 0 ? { required } : {}), properties };
}

function keySchema(key: Key, wrapping: Wrapping): JsonSchema {
  const said = describeDefault(key);
  const description = said === '' ? key.says : `${key.says} Default: ${said}.`;
  const constant = key.default.kind === 'value' && key.default.value !== null ? { default: key.default.value } : {};
  const isRequired = key.default.kind === 'required';
  return { description, ...constant, ...(isRequired ? shapeSchema(key.shape) : wrapping(shapeSchema(key.shape))) };
}

function shapeSchema(shape: Shape): JsonSchema {
  switch (shape.kind) {
    case 'choice':
      return { enum: shape.choices };
    case 'flag':
      return { type: 'boolean' };
    case 'number':
      return { type: shape.whole === 'whole' ? 'integer' : 'number', minimum: shape.min, maximum: shape.max };
    case 'text':
      return { type: 'string', ...patternOf(shape.grammar) };
    case 'list':
      return { type: 'array', minItems: shape.min, maxItems: shape.max, items: shapeSchema(shape.item) };
    case 'record':
      return objectSchema(shape.keys, (schema) => schema);
    case 'group':
      return objectSchema(shape.keys, nullable);
    case 'spread':
      return shapeSchema(shape.shape);
    case 'either':
      return anyOf(shape.options.map(shapeSchema));
    case 'kernel':
      return { anyOf: [{ $ref: '#/definitions/kernel' }] };
    case 'channels':
      return {
        type: 'object',
        additionalProperties: false,
        minProperties: 1,
        patternProperties: { '^(?=.)r?g?b?a?$': { enum: channelContents } },
      };
  }
}

function kernelSchema(): JsonSchema {
  return anyOf([{ enum: kernels.map((kernel) => kernel.name) }, ...kernelObjects()]);
}

/** One object for the kernels without parameters, one for each of the rest. */
function kernelObjects(): readonly JsonSchema[] {
  const plain = kernels.filter((kernel) => kernel.params.length === 0).map((kernel) => kernel.name);
  const name = { enum: plain };
  const bare = { type: 'object', additionalProperties: false, required: ['name'], properties: { name } };
  return [bare, ...kernels.filter((kernel) => kernel.params.length > 0).map(kernelObject)];
}

function kernelObject(kernel: Kernel): JsonSchema {
  const params = kernel.params.map((param) => {
    const values =
      param.allowed === undefined
        ? { type: 'number', minimum: param.min, maximum: param.max }
        : { enum: param.allowed };
    return [param.name, { ...values, default: param.default }] as const;
  });
  const properties = { name: { enum: [kernel.name] }, ...Object.fromEntries(params) };
  return { type: 'object', additionalProperties: false, required: ['name'], properties };
}

function patternOf(grammar: Grammar): JsonSchema {
  switch (grammar) {
    case 'target':
      return { pattern: `${scaleText.source}|${extentText.source}` };
    case 'target-name':
    case 'folder':
    case 'glob':
    case 'output-pattern':
    case 'source-pattern':
      return { minLength: 1 };
    case 'any':
      return {};
  }
}

/** null returns a key to its default. */
function nullable(schema: JsonSchema): JsonSchema {
  if (Array.isArray(schema.enum)) return { ...schema, enum: [...schema.enum, null] };
  if (Array.isArray(schema.anyOf)) return { ...schema, anyOf: [...schema.anyOf, { type: 'null' }] };
  return { ...schema, type: [schema.type, 'null'] };
}

function anyOf(schemas: readonly JsonSchema[]): JsonSchema {
  return { anyOf: schemas.flatMap((schema) => (Array.isArray(schema.anyOf) ? schema.anyOf : [schema])) };
}

import { expect, test } from 'vitest';
import { type Problem, say } from '../../core/problem.ts';
import { type Arguments, readArguments } from '../../extension/cli/arguments.ts';
import { commands, options } from '../../extension/cli/commands.ts';
import { helpText } from '../../extension/cli/help.ts';

const read = (line: string) => readArguments(line.split(' ').filter((word) => word !== ''));

const problems = (line: string) => {
  const result = read(line);
  return 'flags' in result ? [] : result.map((each: Problem) => `${each.code}: ${say(each)}`);
};

test.each<[string, Partial<Arguments>]>([
  ['', { command: 'help' }],
  ['--help', { command: 'help' }],
  ['--version', { command: 'version' }],
  ['build --help', { command: 'help' }],
  ['check --version a', { command: 'version' }],
  ['build a b', { command: 'build', paths: ['a', 'b'] }],
  ['build a --out d b', { paths: ['a', 'b'], out: 'd' }],
  ['build a --out=d=e', { out: 'd=e' }],
  ['build -- --out -a', { paths: ['--out', '-a'], out: null }],
  ['build a --jobs 3 --memory 512MiB', { jobs: 3, memoryBytes: 512 * 2 ** 20 }],
  ['build a --memory 1.5GiB', { memoryBytes: 1.5 * 2 ** 30 }],
  ['build a --memory 1000', { memoryBytes: 1000 }],
  ['build a --settings s.json', { settings: 's.json' }],
  ['rebuild m --source-root r', { command: 'rebuild', sourceRoot: 'r' }],
  ['init', { command: 'init', paths: [] }],
  ['build a', { jobs: null, memoryBytes: null, settings: null, out: null, sourceRoot: null }],
])('%j is understood', (line, expected) => {
  expect(read(line)).toMatchObject(expected);
});

test('every flag is told', () => {
  const result = read('build a --plan --prune --json --quiet');
  expect('flags' in result && [...result.flags]).toEqual(['plan', 'prune', 'json', 'quiet']);
});

test.each([
  ['bild a', /^unknown-command: There is no command bild\. Did you mean build\?/],
  ['build', /^missing-argument: build needs PATH\.\.\./],
  ['build a --otu d', /^unknown-option: There is no option --otu here\. Did you mean --out\?/],
  ['check a --prune', /^unknown-option: There is no option --prune here/],
  ['build a -j', /^unknown-option/],
  ['build a --jobs', /^option-value: Expected COUNT for --jobs but received nothing/],
  ['build a --jobs 0', /^option-value: .* received 0/],
  ['build a --jobs two', /^option-value/],
  ['build a --jobs 1e2', /^option-value/],
  ['build a --memory lots', /^option-value: Expected a size such as 512MiB/],
  ['build a --memory 0', /^option-value/],
  ['build a --plan=yes', /^option-value: Expected no value for --plan/],
  ['build a --out=', /^option-value/],
  ['build a --watch --json', /^options-exclude/],
  ['build a --watch --plan', /^options-exclude/],
  ['init a b', /^option-value/],
])('%j is refused', (line, words) => {
  const said = problems(line);
  expect(said).toHaveLength(1);
  expect(said[0]).toMatch(words);
});

test('everything that is wrong is said at once', () => {
  expect(problems('build --jobs 0 --plam').map((each) => each.split(':')[0])).toEqual([
    'unknown-option',
    'option-value',
    'missing-argument',
  ]);
});

test('help names every command and every option, one line each', () => {
  const text = helpText('1.2.3');
  expect(text).toContain('Sizeproof 1.2.3');
  for (const { name } of commands) expect(text).toMatch(new RegExp(`^ {2}sizeproof ${name} `, 'm'));
  for (const { name } of options) expect(text).toMatch(new RegExp(`^ {2}--${name}[ \\n]`, 'm'));
});

/** Every command there is, as `--help` lists them. */
export const commands = [
  { name: 'init', takes: '[FOLDER]', least: 0, says: 'Write a commented sizeproof.json to start from.' },
  { name: 'build', takes: 'PATH...', least: 1, says: 'Build what moved of the textures under the paths.' },
  {
    name: 'check',
    takes: 'PATH...',
    least: 1,
    says: 'Say what moved since the last build, and which findings pass their limit.',
  },
  {
    name: 'rebuild',
    takes: 'MANIFEST-OR-FOLDER...',
    least: 1,
    says: 'Make outputs again from manifests and sources, without a settings file.',
  },
  {
    name: 'explain',
    takes: 'PATH...',
    least: 1,
    says: 'Say which treatment each texture gets, and which rule set each setting.',
  },
  {
    name: 'proof',
    takes: 'PATH',
    least: 1,
    says: 'Write the proof of one texture as a picture, as a page that stands alone, or both.',
  },
  {
    name: 'review',
    takes: '[RANGE]',
    least: 0,
    says: 'Say what changed in textures at the sizes that matter, the most harmful first.',
  },
] as const;

export type CommandName = (typeof commands)[number]['name'];

export interface OptionEntry {
  readonly name: string;
  /** What the value is called in `--help`; `null` for an option without one. */
  readonly value: string | null;
  readonly commands: readonly CommandName[];
  readonly says: string;
}

const all: readonly CommandName[] = ['init', 'build', 'check', 'rebuild', 'explain', 'proof', 'review'];
const project: readonly CommandName[] = ['build', 'check', 'explain'];

/** Every option there is. `--help` and `--version` also stand alone. */
export const options = [
  {
    name: 'settings',
    value: 'FILE',
    commands: [...project, 'proof'],
    says: 'Use this settings file in place of the nearest one.',
  },
  {
    name: 'out',
    value: 'DIR',
    commands: project,
    says: "Where outputs go or were written; otherwise the settings' outDir.",
  },
  { name: 'json', value: null, commands: all, says: 'Print one JSON document on standard output.' },
  { name: 'quiet', value: null, commands: all, says: 'Print problems alone.' },
  {
    name: 'jobs',
    value: 'COUNT',
    commands: ['build', 'check', 'rebuild', 'review'],
    says: 'Textures worked on at a time; otherwise one for each processor.',
  },
  {
    name: 'memory',
    value: 'SIZE',
    commands: ['build', 'check', 'rebuild', 'review'],
    says: "Bytes that this may hold, as 512MiB or 2GiB; otherwise a quarter of the machine's memory.",
  },
  { name: 'plan', value: null, commands: ['build'], says: 'Say what would be built and why, and build nothing.' },
  { name: 'watch', value: null, commands: ['build'], says: 'Go on building whenever something changes, until Ctrl-C.' },
  { name: 'prune', value: null, commands: ['build'], says: 'Remove the outputs of sources that are no longer there.' },
  {
    name: 'without-outputs',
    value: null,
    commands: ['check'],
    says: 'Leave the outputs out of it: for manifests kept in version control without them.',
  },
  {
    name: 'source-root',
    value: 'DIR',
    commands: ['rebuild'],
    says: 'Look for sources below this folder: for manifests that were moved.',
  },
  {
    name: 'new-algorithm',
    value: null,
    commands: ['rebuild'],
    says: 'Rebuild what another revision of the algorithm built; pixels may change.',
  },
  {
    name: 'sheet',
    value: 'FILE',
    commands: ['proof'],
    says: 'Write the proof sheet here: one PNG picture of every target and of kernels compared.',
  },
  {
    name: 'html',
    value: 'FILE',
    commands: ['proof', 'review'],
    says: 'Write the proof, or the report of a review, here as one HTML file that opens without a network.',
  },
  {
    name: 'kernels',
    value: 'NAMES',
    commands: ['proof'],
    says: "Compare these kernels with the settings' own, as mitchell,lanczos3.",
  },
  {
    name: 'at',
    value: 'TARGET',
    commands: ['proof'],
    says: 'Compare kernels at this level, scale, extent or target, as 3, 0.5x, 48x48 or badge.',
  },
  {
    name: 'keep',
    value: 'WHAT',
    commands: ['proof'],
    says: 'What a page carries of more than 50 MB of source: all, or middle.',
  },
  { name: 'staged', value: null, commands: ['review'], says: 'Compare the last commit with what is staged.' },
  {
    name: 'files',
    value: null,
    commands: ['review'],
    says: 'Compare two files, BEFORE and AFTER, in place of a range.',
  },
  { name: 'headers', value: null, commands: ['review'], says: 'Judge by headers alone, without looking at pixels.' },
  {
    name: 'markdown',
    value: 'FILE',
    commands: ['review'],
    says: 'Write the report as Markdown too, for a comment on the change.',
  },
  { name: 'gitattributes', value: null, commands: ['init'], says: 'Add the line for manifests to .gitattributes.' },
  { name: 'help', value: null, commands: all, says: 'Print this.' },
  { name: 'version', value: null, commands: all, says: 'Print the version.' },
] as const satisfies readonly OptionEntry[];

export type OptionName = (typeof options)[number]['name'];

import type { Node } from 'jsonc-parser';
import type { ChannelContent } from '../treatment.ts';
import { readChoice } from './choice.ts';
import { describeNode } from './describe.ts';
import { type Reading, report } from './reading.ts';

/** Letters of a group: each at most once, in the file's order. */
export const groupLetters = /^(?=.)r?g?b?a?$/;

export const channelContents: readonly ChannelContent[] = ['color', 'normal', 'height', 'data', 'roughness'];

/** Reads `{ "rg": "normal", "b": "roughness" }`. Undefined where there is a problem, which is reported. */
export function readChannels(reading: Reading, node: Node): Record<string, ChannelContent> | undefined {
  const before = reading.problems.length;
  const groups: Record<string, ChannelContent> = {};
  const owners = new Map<string, string>();
  for (const property of node.children ?? []) {
    const [name, value] = property.children as [Node, Node];
    const content = readContent(reading, value, name.value);
    if (groupLetters.test(name.value)) {
      for (const letter of name.value) {
        const other = owners.get(letter);
        if (other !== undefined) report(reading, name, 'channel-shared', { letter, group: name.value, other });
        owners.set(letter, name.value);
      }
      if (content !== undefined) checkGroup(reading, name, content, groups);
    } else {
      report(reading, name, 'channel-group', { group: name.value });
    }
  }
  if (owners.size === 0 && reading.problems.length === before) {
    report(reading, node, 'out-of-range', { key: 'channels', expected: 'at least one group', received: 0 });
  }
  const contents = Object.values(groups);
  if (contents.includes('roughness') && !contents.includes('normal')) report(reading, node, 'roughness-alone', {});
  return reading.problems.length === before ? groups : undefined;
}

function readContent(reading: Reading, value: Node, group: string): ChannelContent | undefined {
  const key = `channels.${group}`;
  if (value.type === 'string') return readChoice(reading, value, channelContents, key) as ChannelContent | undefined;
  report(reading, value, 'wrong-type', { key, expected: 'a content', received: describeNode(value) });
  return undefined;
}

/** Notes a group after looking at its number of letters and at earlier groups: normals and roughness come once. */
function checkGroup(
  reading: Reading,
  name: Node,
  content: ChannelContent,
  groups: Record<string, ChannelContent>,
): void {
  const group: string = name.value;
  const count = group.length;
  if (content === 'normal' && (count < 2 || count > 3)) {
    report(reading, name, 'channel-count', { group, content, count, expected: '2 or 3' });
  }
  if (content === 'roughness' && count !== 1)
    report(reading, name, 'channel-count', { group, content, count, expected: 1 });
  const once = content === 'normal' || content === 'roughness';
  const other = Object.keys(groups).find((each) => groups[each] === content);
  if (once && other !== undefined) report(reading, name, 'content-twice', { content, group, other });
  groups[group] = content;
}

import type { Query } from '../../core/treatment/find/select.ts';
import { slashed } from '../node/files/node-disk.ts';
import type { Arguments } from './arguments.ts';
import type { Shell } from './shell.ts';

/** What a command line asks for, in the house's paths. */
export function queryOf(args: Arguments, shell: Shell): Query {
  return {
    folder: shell.folder,
    paths: args.paths.map(slashed),
    ...(args.settings === null ? {} : { settings: slashed(args.settings) }),
    ...(args.out === null ? {} : { out: slashed(args.out) }),
  };
}

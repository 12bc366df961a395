import { buildTexture } from '../../core/build/texture.ts';
import type { Inflate } from '../../core/port.ts';
import type { Query } from '../../core/treatment/find/select.ts';
import type { Disk } from '../../extension/node/files/disk.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import {
  type BuildOptions,
  type BuildReport,
  buildProject,
  type Reporter,
} from '../../extension/node/project/build.ts';
import { type CheckReport, checkProject } from '../../extension/node/project/check.ts';
import { type RebuildOptions, rebuildProject } from '../../extension/node/project/rebuild.ts';
import { runJob } from '../../extension/node/workers/measure-job.ts';
import { planJob } from '../../extension/node/workers/plan-job.ts';
import type { RunJobs } from '../../extension/node/workers/pool.ts';
import { writePng } from '../fixtures/rawpng.ts';

/** A small RGBA picture whose colors follow from `seed`. */
export function smallPng(seed: number, width = 8, height = width): Uint8Array {
  const sample = (x: number, y: number, channel: number) => (seed * 37 + x * (29 + channel) + y * 53) & 255;
  return writePng({ width, height, bitDepth: 8, colorType: 6, sample });
}

/** Settings as a file's text. */
export const settingsText = (settings: object) => JSON.stringify(settings);

export interface Setting {
  readonly disk?: Disk;
  readonly query?: Partial<Query>;
  readonly options?: Partial<BuildOptions>;
  /** Counts what is inflated. */
  readonly inflate?: Inflate;
  readonly isCancelled?: () => boolean;
  /** Told when a job asks for memory. */
  readonly admitting?: () => void;
  /** In place of running jobs here. */
  readonly run?: RunJobs;
}

const silent: Reporter = { begin: () => undefined, done: () => undefined };

/** Builds everything below a folder in this process, one texture after the other. */
export function build(folder: string, setting: Setting = {}): Promise<BuildReport> {
  const options: BuildOptions = {
    query: { folder, paths: ['.'], ...setting.query },
    mode: 'build',
    orphans: 'keep',
    memoryBytes: 2 ** 30,
    cacheFolder: null,
    ...setting.options,
  };
  return buildProject(options, toolsOf(setting), silent);
}

export function check(
  folder: string,
  setting: Setting & { look?: 'with outputs' | 'without outputs' } = {},
): Promise<CheckReport> {
  const { disk = nodeDisk, isCancelled = () => false, look = 'with outputs' } = setting;
  const query = { folder, paths: ['.'], ...setting.query };
  const options = { query, look, cacheFolder: null, memoryBytes: 2 ** 30, nameOf: (path: string) => path };
  return checkProject(options, { ...toolsOf(setting), disk, ports: nodePorts, isCancelled });
}

export function rebuild(
  folder: string,
  options: Partial<RebuildOptions> = {},
  setting: Setting = {},
): Promise<BuildReport> {
  const all = {
    folder,
    paths: ['.'],
    sourceRoot: null,
    algorithm: 'recorded',
    memoryBytes: 2 ** 30,
    ...options,
  } as const;
  return rebuildProject(all, toolsOf(setting), silent);
}

function toolsOf(setting: Setting) {
  const { disk = nodeDisk, isCancelled = () => false } = setting;
  return { disk, run: setting.run ?? runHere(disk, setting), isCancelled };
}

function runHere(disk: Disk, setting: Setting): RunJobs {
  const { inflate = nodePorts.inflate, isCancelled = () => false, admitting = () => undefined } = setting;
  const cancel = {
    get cancelled() {
      return isCancelled();
    },
  };
  const ports = { ...nodePorts, inflate };
  const bench = {
    disk,
    ports,
    cancel,
    buildTexture,
    planJob,
    admit: async () => admitting(),
    wait: async () => undefined,
  };
  return async (jobs, done) => {
    for (const [index, job] of jobs.entries()) done(index, await runJob(job, bench));
  };
}

/** Codes of problems with what they are about, relative to a folder. */
export function told(report: { readonly problems: BuildReport['problems'] }, folder: string): string[] {
  return report.problems.map(({ code, path }) => `${code} ${path?.replace(`${folder}/`, '') ?? '-'}`);
}

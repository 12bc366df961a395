import * as vscode from 'vscode';
import { Refusal } from '../../../core/problem.ts';
import type { Abilities, HostCalls } from '../../../core/protocol.ts';
import type { BuildDesk } from '../build/desk.ts';
import { doorFor } from '../build/hindrance.ts';
import { countBuild } from '../build/report.ts';
import type { Platform } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import { hindranceToWriting } from '../settings/create.ts';
import { openSettings } from '../settings/open.ts';
import { sayProblem, translations } from '../words.ts';
import { adopt } from './adopt.ts';
import type { Answers } from './channel.ts';
import type { ProofDocument } from './document.ts';
import { type ExportTools, exportProof } from './export.ts';
import { reportOf, revealOutputs } from './outputs.ts';

/** What the host answers to a proof's page. */
export function answersFor(
  { facts: texture, first }: ProofDocument,
  { platform, desk, pages }: ExportTools & { readonly desk: BuildDesk },
): Answers<HostCalls> {
  const { uri } = texture;
  return {
    async open() {
      const { path } = await texture.settings();
      return {
        name: texture.name,
        path,
        byteCount: await texture.byteCount(),
        settings: await texture.settingsReply(),
        state: await texture.builtState(),
        abilities: abilitiesFor(uri, platform),
        preferences: readConfiguration(uri).preferences,
        words: translations(),
        remark: null,
      };
    },
    async firstPrint(at) {
      return { print: await first.print(at) };
    },
    async bytes() {
      return { image: await texture.bytes(), roughness: await texture.roughness() };
    },
    async build() {
      const opened = doorFor('writes', uri, platform);
      if ('problem' in opened) throw new Refusal(opened.problem);
      const report = await desk.build('build', [uri], 'asked');
      return report === null ? { built: 0, unchanged: 0, failed: 0 } : countBuild(report);
    },
    async isBuilt(print) {
      return { equal: await texture.isBuilt(print) };
    },
    adopt: (change) => adopt(uri, change, platform),
    async showSettings({ key }) {
      await openSettings(uri, key, platform, vscode.ViewColumn.Beside);
      return {};
    },
    async copy({ text }) {
      await vscode.env.clipboard.writeText(text);
      return {};
    },
    async save({ name, bytes }) {
      const defaultUri = vscode.Uri.joinPath(uri, '..', name);
      const target = await vscode.window.showSaveDialog({ defaultUri });
      if (target === undefined) return { path: null };
      await vscode.workspace.fs.writeFile(target, new Uint8Array(bytes));
      return { path: target.path };
    },
    async reveal() {
      await revealOutputs(texture);
      return {};
    },
    async report() {
      await vscode.env.clipboard.writeText(await reportOf(texture));
      return {};
    },
    async export(order) {
      const written = await exportProof(texture, order, { platform, pages });
      return { path: written?.path ?? null };
    },
  };
}

/** What can be done with a texture here, or in words why not. */
function abilitiesFor(uri: vscode.Uri, platform: Platform): Abilities {
  const building = doorFor('writes', uri, platform);
  const reading = doorFor('reads', uri, platform);
  const writing = hindranceToWriting(uri);
  return {
    build: 'problem' in building ? sayProblem(building.problem) : true,
    adopt: writing === null ? true : sayProblem(writing),
    reveal: 'problem' in reading ? sayProblem(reading.problem) : true,
    settings: true,
    export: true,
  };
}

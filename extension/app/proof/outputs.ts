import * as vscode from 'vscode';
import { Refusal, refuse } from '../../../core/problem.ts';
import { explanationLines } from '../settings/explain.ts';
import type { TextureFacts } from './facts.ts';

/** Shows a texture's manifest, which names all its outputs, in the explorer. Throws Refusal where there is none. */
export async function revealOutputs(texture: TextureFacts): Promise<void> {
  const found = await texture.inspect();
  if (found === null) {
    const [problem] = (await texture.settings()).problems;
    if (problem !== undefined) throw new Refusal(problem);
    return refuse('no-disk', {}, { path: texture.uri.path });
  }
  if (found.manifest === null) refuse('not-built', {}, { path: texture.uri.path });
  await vscode.commands.executeCommand('revealInExplorer', vscode.Uri.file(found.manifestPath));
}

/** All that is known of a texture, as text: its treatment, and what its manifest measured. */
export async function reportOf(texture: TextureFacts): Promise<string> {
  const lines = explanationLines(await texture.settings());
  const found = await texture.inspect();
  const { manifest, reasons } = found ?? { manifest: null, reasons: [] };
  const state =
    manifest === null
      ? vscode.l10n.t('not built')
      : reasons.length === 0
        ? vscode.l10n.t('as built')
        : vscode.l10n.t('moved since it was built: {what}', { what: reasons.join(', ') });
  const images = [...(manifest?.levels ?? []), ...(manifest?.targets ?? [])].map(
    ({ use, level, target, extent, coverage, luminance, pixels }) =>
      [
        use,
        target ?? level ?? '',
        extent.join('x'),
        coverage === undefined ? '' : `coverage ${coverage}`,
        luminance === undefined ? '' : `luminance ${luminance}`,
        pixels,
      ].join('\t'),
  );
  return [...lines, '', vscode.l10n.t('Outputs: {state}', { state }), ...images, ...(manifest?.notes ?? [])]
    .map((line) => `${line}\n`)
    .join('');
}

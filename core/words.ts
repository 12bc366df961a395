// One English template per problem code, grouped by the exit code it leads to. `{name}` is filled from the problem's
// values. The last sentence says what to do. Doors put `path:line:column: error code: ` in front.

/** Exit 1: findings over their limit, or outputs that are not what their manifest says. */
const findings = {
  stale: 'The {what} moved since this was built. Build again.',
  'not-built': 'There is no manifest of this texture. Build it.',
  interrupted: 'A build was ended while it replaced these outputs: old and new files are mixed. Build again.',
  orphan: 'The source {source} is gone. Remove its outputs with `build --prune`, or bring the source back.',
  'orphan-moved': 'The source {source} moved to {to}. Build again with `--prune`.',
  'orphan-excluded':
    'The settings no longer build {source} to this place. Remove these outputs with `build --prune`, or correct the settings.',
  'output-edited':
    'This output is no longer asked for, but it was edited after it was built, so it was kept. Remove it by hand.',
  're-encoded':
    'Re-encoded, same pixels: the file differs from the recorded one, the image does not. Nothing needs doing.',
  'manifest-conflict': 'A merge left its conflict markers in this manifest. Build again to write it anew.',
  'algorithm-moved':
    'This was built with algorithm {recorded}, this version has {current}. Rebuild with `--new-algorithm` to take the new one.',
  thinning:
    'Level {level} keeps {share} of the coverage of level 0; the limit allows a loss of {limit}. Keep coverage, ship fewer levels or raise the limit.',
  halo: 'At {image}, texel {x}, {y}, a color overshoots its surroundings by {worst} codes ({share} of the texels overshoot, {clipped} are clipped); the limit is {limit}. Choose a softer kernel, or raise the limit.',
  'over-budget':
    'The chain takes {bytes} bytes as {format}; the budget is {budget}. Drop levels, choose a smaller format or raise the budget.',
  'engine-plain':
    'The SIMD engine cannot run here: {reason}. The plain engine makes the same files in several times the time. Allow WebAssembly with SIMD to have the fast one.',
  'review-harm': 'The change does harm: {harm}. Look at it, or set `review.harm` to report.',
  'review-coverage':
    'At {image} the change loses {loss} of the coverage; the limit is {limit}. Keep coverage, or raise `review.coverageLoss`.',
  'review-light':
    'At {image} the change moves mean luminance by {change}; the limit is {limit}. Look at it, or raise `review.lightChange`.',
  'review-texels':
    'The change loses {loss} of the texels; the limit is {limit}. Bring the former extent back, or raise `review.texelLoss`.',
  'review-file':
    'The file grows from {before} to {after}; the limit is {limit} more. Save it smaller, or raise `review.fileGrowth`.',
  'review-memory':
    'The levels take {bytes} bytes more on the GPU; the limit is {limit}. Ship fewer texels or channels, or raise `review.memoryGrowth`.',
  'match-unused': 'The glob {glob} of {rule} matches no texture. Correct or remove it.',
} as const;

/** Exit 2: usage and settings. */
const usage = {
  'nothing-selected': 'No texture matches {selector}. Check the path, the extensions and the exclude globs.',
  'no-manifest':
    'There is no manifest at {selector}. Name a file that ends in .mips.json, or a folder that holds some.',
  'source-root-needed':
    'The manifest knows {source} from its root alone, which lies elsewhere. Name that folder with `--source-root`.',
  'unknown-command': 'There is no command {given}. Did you mean {nearest}? `--help` lists them all.',
  'unknown-option': 'There is no option {given} here. Did you mean {nearest}? `--help` lists them all.',
  'option-value': 'Expected {expected} for {option} but received {received}. Correct the command line.',
  'options-exclude': '{first} and {second} cannot be used together. Leave one of them out.',
  'missing-argument': '{command} needs {what}. Name at least one.',
  'several-roots': '--out takes one root, but the paths given lie in {count}: {roots}. Run once for each.',
  'git-missing': 'Git is not installed, or not on the PATH. Install it, or compare two files with `review --files`.',
  'git-no-repository': '{folder} is in no Git repository. Run this in one, or compare two files with `review --files`.',
  'git-ref': 'There is no commit {ref} in this repository. Check its spelling, or fetch it.',
  'git-ref-dash': 'The name {ref} begins with a dash and is not handed to Git. Name the commit by its id.',
  'git-shallow':
    'This clone is shallow and holds no {what}. Fetch more of its history, such as with `git fetch --unshallow`, and review again.',
  'git-no-base': '{from} and {to} have no commit in common. Compare them as they are, with `{from}..{to}`.',
  'git-failed': 'Git could not tell what changed: {reason}. Put that right and review again.',
  'settings-exist': 'There is a settings file here already; it was left as it is. Edit it, or remove it first.',
  'color-chunk':
    'The color chunk {chunk} says {value}, which cannot be obeyed. Convert the image to sRGB, or set `colorChunks` to `ignore`.',
  'roughness-grid':
    'A roughness map beside a sheet with a grid cannot be built. Pack roughness into the same file, or remove the grid.',
  'channel-missing':
    'The settings name channel {letter}, but the file has {channels} channels: {letters}. Export it with that channel, or correct `channels`.',
  'normal-channels':
    'A normal needs two or three channels and {found} of the {channels} in the file mean one. Export it as RGB, or correct `content` and `channels`.',
  'kernel-cannot': 'Kernel {kernel} cannot {action} {from} to {to} texels. Use one that can: {others}.',
  'kernel-both-ways':
    'Target {target} makes one axis smaller and the other larger; {kernels} cannot be combined so. Use one kernel of weights for both.',
  'scaler-factor':
    'Kernel {kernel} magnifies by whole factors made of {factors}, the same on both axes; {from} to {to} is none. Choose such a target or another kernel.',
  'grid-remainder':
    'The sheet is {extent} texels; cells of {cell} with {gutter} texels of gutter on each side leave {rest} over. Correct the grid or the sheet.',
  'grid-target':
    'Target {target} would make cells of {width} x {height} texels. With a grid only scales that give whole texels can be built.',
  'roughness-extent': 'The roughness map is {found} texels and the normal map {expected}. Export both at one extent.',
  'too-much-memory':
    'Building this would hold {bytes} bytes; {limit} are allowed. Raise `--memory`, or make the image smaller.',
  'settings-syntax': 'This is not JSON with comments: {reason}. Correct the text here.',
  'settings-unreadable': 'The settings file could not be read. Check that it is there and its permissions.',
  'settings-encoding': 'The settings file is not UTF-8. Save it as UTF-8.',
  'folder-unreadable': 'The folder could not be listed. Check its permissions, or exclude it by choosing other paths.',
  'unknown-key': 'There is no setting "{key}" here; the nearest is "{nearest}". Correct or remove it.',
  'duplicate-key': 'The key "{key}" was given at {first} already. Keep one of them.',
  'missing-key': 'The key "{key}" is missing in this object. Add it.',
  'wrong-type': '{key} takes {expected}, not {received}. Correct the value.',
  'out-of-range': '{key} takes {expected} but received {received}. Choose a value that fits.',
  'bad-choice': '{key} has no choice {received}; the nearest is {nearest}. Choose one of {choices}.',
  'bad-glob': 'The glob {glob} cannot be used: {reason}. Write it otherwise.',
  'leaves-root':
    'The path {path} may leave the root: it has a backslash, a drive letter, a leading / or a .. segment. Write it from the root with / alone.',
  'unknown-placeholder': 'There is no placeholder {placeholder}. Use {known}, and no other braces.',
  'bad-target-name':
    'The target name "{name}" cannot be part of a file name, or reads as a level. Use letters, digits, - and _, not digits alone.',
  'target-twice': 'Two targets are called "{name}". Give one of them another `name`.',
  'channel-group': 'The key "{group}" is no channel group. Use each of r, g, b and a once at most, in this order.',
  'channel-shared': 'Channel {letter} is in "{group}" and in "{other}". Leave it in one group.',
  'channel-count': 'The group "{group}" has {count} letters; {content} takes {expected}. Correct the letters.',
  'content-twice': 'Both "{group}" and "{other}" are {content}; a file has it once. Make one of them data.',
  'roughness-alone':
    'A roughness channel takes up the spread of normals, but no group is normal. Make it data, or name the normal group.',
  'premultiplied-png': 'PNG cannot hold premultiplied color. Take png out of `outputs`, or store straight.',
  'premultiplied-use':
    'Color is premultiplied by opacity, but alpha is used as {use}. Set `alpha.use` to opacity, or store straight.',
  'coverage-use':
    'Coverage can be kept for a mask, but alpha is used as {use}. Set `alpha.use` to mask, or drop `keepCoverage`.',
  'coverage-premultiplied':
    'Keeping coverage scales alpha, which premultiplied color does not follow. Set `keepCoverage` to false, or store straight.',
  'border-use':
    'The border of clamp-to-border is transparent, but alpha is used as {use}. Set `alpha.use` to opacity or mask, or choose another wrap.',
  'alpha-in-group':
    'The group "{group}" makes alpha {content}, but it is used as {use}. Set `alpha.use` to data, or take a out of the group.',
  'normal-transfer': 'Normals are directions, not light. Set `transfer` to linear for their channels.',
  'normal-count':
    'The normal has {count} channels, but its group "{group}" does not. Remove `normal.count`; the group tells it.',
  'roughness-twice':
    'Roughness is in this file already, as "{group}". Remove `normal.roughness`, or make the channel data.',
  'roughness-pathless': 'A channel of a roughness map is named, but no map. Add `path`.',
  'levels-order': 'The first level {first} comes after the last, {last}. Swap them.',
  'targets-png': 'Targets are written as PNG alone. Add png to `outputs`, or set `targets` to an empty list.',
  'cell-use':
    'The rest of the cell {target} is transparent, but alpha is used as {use}. Set `alpha.use` to opacity or mask, or use an extent.',
  'grid-scale':
    'Cells of a grid are scaled one by one; the target {target} is one size for a whole image. Use a scale.',
  'name-lacks': 'Without {placeholder} in `name` the {what} would all be one file. Add it.',
  'name-beside':
    'With outputs beside their sources, `name` must keep them in that folder: {pattern} may not. Begin it with the placeholder for the path and use no other slash.',
  'kernel-direction':
    'Kernel {kernel} cannot {direction}, which {asked} asks for. Use {instead}, or one kernel for each direction.',
  'kernel-scale':
    'Kernel {kernel} cannot make the target {target}: it takes 2x, 3x and their products. Choose such a scale, or another kernel.',
  'bad-output-name':
    'An output would be called "{name}", which no system may carry: {reason}. Rename the source, or use `name`.',
  'same-output': '{first} and {second} would both write {output}. Settle it in the settings, such as with {line}.',
  'output-twice': 'Two results would both be {output}. Give the target another `name`.',
  'review-untrusted':
    'This workspace is not trusted, and a review runs Git in it. Trust the workspace (Manage Workspace Trust) and review again.',
  'review-no-git':
    'A review compares what Git has, and this folder is not on a disk where Git can run. Open a local copy of it, or a remote workspace.',
  'review-nothing': 'No changed texture is at hand. Begin a review, or refresh the one there is.',
  'review-no-image': '{name} is no PNG or TGA image. Choose a texture.',
  'review-two': 'Two textures are compared at a time, and {count} are selected. Select two.',
  untrusted:
    'This workspace is not trusted, so nothing is built, run or written in it. Trust it (Workspaces: Manage Workspace Trust) and try again.',
  'no-disk':
    'This folder is on no disk that builds can reach; it can only be looked at. Open it from a disk to build it.',
  'read-only': 'This folder cannot be written to. Open it from a place that can.',
  'no-treatment': 'No treatment matches {path}. Adopt for this file only.',
  'bad-message':
    'The page sent what was not understood: expected {expected} for {where}. Close the proof and open it again.',
  'proof-nowhere': 'Nothing says what to write. Add `--sheet FILE` for a picture, `--html FILE` for a page, or both.',
  'one-texture': 'A proof is of one texture, and {count} lie under this path. Name the file.',
  'no-such-target':
    'There is no target "{given}". Name a level such as 3, a scale such as 0.5x, an extent such as 48x48, or one of the settings: {known}.',
  'export-too-large':
    'The page would carry {bytes} bytes of source; more than {limit} are carried only when asked for. Add `--keep all`, or `--keep middle` for its middle alone.',
  'exported-page': 'This page was exported and has no editor to ask. Open the texture in the editor.',
  'page-outdated':
    'This page speaks version {page} of the protocol and the extension version {host}. Close the proof and open it again.',
} as const;

/** Exit 3: a source that could not be read. */
const sources = {
  'not-downloaded':
    'This is a Git LFS pointer, not the image: {bytes} bytes are expected. Fetch it with `git lfs pull` and build again.',
  'git-object-missing':
    'The repository has no object {id} for this file. Fetch it, and check the repository with `git fsck`.',
  'git-object-damaged': 'Git cannot read object {id} of this file: {reason}. Check the repository with `git fsck`.',
  'git-unmerged': 'This file has a merge conflict. Settle it, and review again.',
  'submodule-missing':
    'The submodule moved from {from} to {to}, and its repository here does not hold both. Fetch it with `git submodule update --init`.',
  'lfs-missing':
    'Git LFS has not fetched this version of the file: {bytes} bytes are expected. Fetch it with `git lfs fetch` and review again.',
  'lfs-damaged':
    'The copy of this file that Git LFS keeps has SHA-256 {found}, not {expected}. Remove it and fetch it again.',
  'side-too-large': 'This version of the file has {bytes} bytes; up to {limit} are looked at. Raise `--memory`.',
  'settings-broken':
    'The settings of this texture cannot be read, so nobody knows how it is treated. Correct them first.',
  'not-a-file': 'This is {kind}, not a file. There is no picture to compare.',
  'file-empty': 'The file is empty. Restore it or export it again.',
  'unknown-format':
    'The content is not PNG and the extension {extension} is none of {known}. Convert the image or exclude the file.',
  'extent-out-of-range':
    'The image is {width} x {height} texels; each axis must be {min}..{max}. Export it within that range.',
  'png-signature':
    'The file begins with the bytes {found}, not with the PNG signature {expected}. Restore it from a copy that no text transfer has changed, or export it again.',
  'png-file-truncated':
    'The file ends at byte {found}, before the end of chunk {chunk} at byte {expected}. Restore it or export it again.',
  'png-chunk-name':
    'The chunk at byte {offset} is named by the bytes {found}, which are not four letters. Restore the file or export it again.',
  'png-chunk-crc':
    'Chunk {chunk} at byte {offset} is damaged: its CRC is {found}, the file says {expected}. Restore the file or export it again.',
  'png-chunk-length':
    'Chunk {chunk} at byte {offset} holds {found} bytes where {expected} are expected. Export the image again.',
  'png-chunk-order': 'Chunk {chunk} at byte {offset} is out of place after {after}. Export the image again.',
  'png-missing-chunk':
    'Chunk {chunk} is missing: at byte {offset} stands {found} instead. Restore the file or export it again.',
  'png-unknown-chunk':
    'Chunk {chunk} at byte {offset} is marked critical and is not part of PNG. Export the image again as plain PNG.',
  'png-forbidden-chunk':
    'Chunk {chunk} at byte {offset} is not allowed with color type {colorType}. Export the image again.',
  'png-header': 'The header says {field} {found}; PNG allows {allowed}. Restore the file or export it again.',
  'png-palette-size': 'The palette has {found} entries; 1..{allowed} are allowed. Export the image again.',
  'png-promise':
    'The header promises {expected} bytes of image data, which {found} compressed bytes cannot hold. Restore the file or export it again.',
  'png-truncated':
    'The image data ends after {found} of the {expected} bytes that the header promises. Restore the file or export it again.',
  'png-surplus':
    'There is image data beyond the {expected} bytes that the header promises. Open the image in a paint program and save it again.',
  'png-corrupt-data':
    'The compressed image data is damaged after {found} of {expected} bytes. Restore the file or export it again.',
  'png-filter': 'Row {row} names the filter {found}; PNG has the filters 0..4. Restore the file or export it again.',
  'png-palette-index':
    'The texel at {x}, {y} uses palette entry {found} of a palette of {entries} (counted from 0). Export the image again.',
  'tga-header': 'The header says {field} {found}; a TGA image has {allowed}. Restore the file or export it again.',
  'tga-truncated':
    'The file ends at byte {found}, before the end of its {part} at byte {expected} or later. Restore it or export it again.',
  'tga-packet':
    'The run-length packet at byte {offset} goes {found} texels beyond the end of the image. Restore the file or export it again.',
  'tga-surplus':
    '{found} bytes follow the image at byte {offset} and no TGA footer accounts for them. Open the image in a paint program and save it again.',
  'tga-premultiplied':
    'The extension area says that colors are multiplied by alpha (attributes type 4). Export the image with straight alpha.',
  'tga-palette-index':
    'The texel at {x}, {y} uses color map entry {found}; the map holds {first}..{last}. Export the image again.',
  'file-gone': 'The file is no longer there. Bring it back, or close the proof.',
  'file-too-large':
    'The file has {bytes} bytes; a proof takes up to {limit}. Build it from the command line, or make it smaller.',
  'source-missing': 'The source is not there. Bring it back, or name its folder with `--source-root`.',
  'source-moved':
    'The source has SHA-256 {now}; the manifest was built from {recorded}. Bring that version back, or build again.',
  'source-unreadable': 'The file could not be read: {reason}. Check its permissions and the disk.',
  'manifest-newer': 'This manifest has format {format}; this version reads up to {known}. Update Sizeproof.',
  'manifest-damaged':
    'This is no manifest: expected {expected} for {where}. Bring it back from version control, or build again.',
  'worker-ended':
    'The worker that built this ended: {reason}. Build it alone with `--jobs 1`; if it happens again, report it.',
  'watch-failed': 'This folder cannot be watched: {reason}. Build without `--watch`.',
  unexpected: 'Something went wrong that should not: {reason}. Report it, with the file if you can.',
} as const;

/** Exit 4: outputs that could not be written. */
const outputs = {
  'output-busy':
    'Another program holds this file open; it could not be replaced within {seconds} s. Close it and build again.',
  'output-unwritable':
    'This could not be written: {reason}. Check the permissions of its folder, or choose another with `--out`.',
  'disk-full': 'The disk is full: {bytes} bytes could not be written. Free some space and build again.',
  'leaves-folder':
    'This output would be written to {resolved}, outside {folder}. Correct the name, the outDir or the link.',
  'output-is-source': 'This output would replace the source {source}. Choose another outDir or name.',
} as const;

export const words = { ...findings, ...usage, ...sources, ...outputs } as const;

export type Code = keyof typeof words;

/** The values that a code's template names. */
export type Values<C extends Code> = { readonly [Name in Placeholder<(typeof words)[C]>]: string | number };

/** A problem's code with the values that its template names: a problem without its place. */
export type Fault = { readonly [C in Code]: { readonly code: C; readonly values: Values<C> } }[Code];

type Placeholder<Text extends string> = Text extends `${string}{${infer Name}}${infer Rest}`
  ? Name | Placeholder<Rest>
  : never;

export function exitOf(code: Code): 1 | 2 | 3 | 4 {
  if (code in findings) return 1;
  if (code in usage) return 2;
  if (code in sources) return 3;
  return 4;
}

import { refuse } from '../problem.ts';
import { MANIFEST_FORMAT, type Manifest } from './manifest.ts';
import { manifestShape } from './schema.ts';
import { Misfit } from './shape.ts';

/** Reads a manifest and checks every field. `path` names it in problems: `manifest-conflict` where a merge left its markers,
 *  `manifest-newer` for a later format, `manifest-damaged` for anything else that no writer of this format makes. */
export function readManifest(text: string, path: string): Manifest {
  const conflict = conflictLine(text);
  if (conflict > 0) refuse('manifest-conflict', {}, { path, line: conflict, column: 1 });
  const value = parse(text, path);
  const format = (value as { format?: unknown } | null)?.format;
  if (typeof format === 'number' && format > MANIFEST_FORMAT) {
    refuse('manifest-newer', { format, known: MANIFEST_FORMAT }, { path });
  }
  try {
    return manifestShape(value, '');
  } catch (error) {
    if (!(error instanceof Misfit)) throw error;
    return refuse('manifest-damaged', { where: error.at || 'the document', expected: error.expected }, { path });
  }
}

/** The line, from 1, of the first merge marker; 0 where there is none. No JSON text has a line that starts so. */
function conflictLine(text: string): number {
  const marker = /^(?:<{7} |>{7} |={7}\r?$)/m.exec(text);
  return marker === null ? 0 : text.slice(0, marker.index).split('\n').length;
}

function parse(text: string, path: string): unknown {
  try {
    return JSON.parse(text.charCodeAt(0) === 0xfeff ? text.slice(1) : text);
  } catch {
    return refuse('manifest-damaged', { where: 'the document', expected: 'JSON' }, { path });
  }
}

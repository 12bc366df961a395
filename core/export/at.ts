import { refuse } from '../problem.ts';
import { OWN_SLOT, type Sight, type Slot, STATE_VERSION } from '../proof/slot.ts';
import { extentText, scaleText } from '../treatment/text/grammar.ts';
import { resolveTarget } from '../treatment/text/target.ts';
import type { KernelChoice, Target, Treatment } from '../treatment/treatment.ts';

/** The state of a page that stands at a target and compares kernels; null where neither is asked for. `at` is a level, the name
 *  of one of the settings' targets, a scale or an extent. Throws Refusal: `no-such-target`. */
export function stateAt(
  asked: { readonly at: string | null; readonly kernels: readonly KernelChoice[] | null },
  treatment: Treatment,
): Readonly<Record<string, unknown>> | null {
  const { at, kernels } = asked;
  if (at === null && kernels === null) return null;
  const { sight, typed } = at === null ? { sight: null, typed: [] } : placeOf(at, treatment);
  const others = (kernels ?? []).map((kernel, i): Slot => ({ id: i + 1, kernel, change: {} }));
  return { version: STATE_VERSION, sight, typed, slots: [OWN_SLOT, ...others], selected: 0 };
}

function placeOf(at: string, treatment: Treatment): { readonly sight: Sight; readonly typed: readonly Target[] } {
  const known = treatment.targets.find(({ name }) => name === at);
  if (known !== undefined) return { sight: { kind: 'target', name: known.name }, typed: [] };
  if (/^\d{1,2}$/.test(at) && Number(at) <= LAST_LEVEL)
    return { sight: { kind: 'level', level: Number(at) }, typed: [] };
  const scale = Number(scaleText.exec(at)?.[1] ?? Number.NaN);
  const extent = extentText.exec(at);
  const isScale = scale >= 1 / 1024 && scale <= 64;
  const isExtent = extent !== null && Number(extent[1]) <= MOST_SIDE && Number(extent[2]) <= MOST_SIDE;
  if (!isScale && !isExtent) {
    const names = treatment.targets.map(({ name }) => name);
    refuse('no-such-target', { given: at, known: names.length === 0 ? 'it has none' : names.join(', ') });
  }
  const target = resolveTarget(at);
  return { sight: { kind: 'target', name: target.name }, typed: [target] };
}

/** Of the largest image there may be. */
const LAST_LEVEL = 14;
const MOST_SIDE = 16384;

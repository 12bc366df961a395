import type { Problem } from '../../../core/problem.ts';
import { lastLevelOf, type Opening, openingLevel } from '../../../core/proof/opening.ts';
import { type Sight, type Slot, treatmentOf } from '../../../core/proof/slot.ts';
import type { HaloAnswer, LevelsAnswer, Print, PrintImage, Want } from '../../../core/proof/want.ts';
import type { BuiltState, HostEvent, OpenReply, Preferences, SettingsReply } from '../../../core/protocol.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import type { Target, Treatment } from '../../../core/treatment/treatment.ts';
import type { ProofLink } from '../../link/proof-link.ts';
import { setWords } from '../words/t.ts';
import { type BenchLink, isProblem, type Told } from './bench-link.ts';
import { BuiltChecks } from './built-checks.ts';
import { exportProof } from './export-proof.ts';
import type { Outlook } from './lod.ts';
import { type Output, outputsOf } from './output.ts';
import { extentAt, type Stop, stopsOf } from './scale.ts';
import { readState, type Show, type State, writeState } from './state.ts';
import { Takeover } from './takeover.ts';

/** All that the page knows, and the one way in which it changes. Fires `change` when something did. */
export class Model extends EventTarget {
  readonly link: ProofLink;
  readonly #makeBench: (changed: () => void) => Promise<BenchLink>;
  #bench: BenchLink | null = null;
  #starting: Promise<BenchLink> | null = null;
  #state: State;
  #stops: {
    readonly base: Extent;
    readonly treatment: Treatment;
    readonly typed: readonly Target[];
    readonly stops: readonly Stop[];
  } | null = null;
  readonly takeover = new Takeover();
  readonly #checks: BuiltChecks;
  readonly #treatments = new WeakMap<Slot, { readonly settings: Treatment; readonly treatment: Treatment }>();
  open: OpenReply | null = null;
  settings: SettingsReply | null = null;
  built: BuiltState = { kind: 'unknown' };
  /** Whether the file is there; it may go away while it is looked at. */
  present = true;
  /** Why the page cannot show anything. */
  problem: Problem | null = null;
  /** What the last action said, in words, and whether it went wrong. */
  note: { readonly text: string; readonly kind: 'said' | 'failed' } | null = null;
  #keeping: ReturnType<typeof setTimeout> | undefined;

  constructor(link: ProofLink, makeBench: (changed: () => void) => Promise<BenchLink>) {
    super();
    this.link = link;
    this.#makeBench = makeBench;
    this.#checks = new BuiltChecks(link, () => this.#changed());
    this.#state = readState(link.kept());
    link.listen((event) => this.#take(event));
  }

  get state(): State {
    return this.#state;
  }

  /** Changes what is kept; the rest of the page follows. */
  set(patch: Partial<State>): void {
    this.#state = { ...this.#state, ...patch };
    clearTimeout(this.#keeping);
    this.#keeping = setTimeout(() => this.link.keep(writeState(this.#state)), 150);
    this.#changed();
  }

  say(note: Model['note']): void {
    this.note = note;
    this.#changed();
  }

  /** Handshake, then the file's bytes. Also what trying again does. The host's first print hangs on nothing that the handshake says, and is
   *  asked for with it. */
  async start(): Promise<void> {
    this.problem = null;
    this.#changed();
    const first = this.#askFirst();
    const { reply } = await this.link.ask('open', null);
    if ('problem' in reply) return this.#fail(reply.problem);
    this.open = reply.ok;
    setWords(reply.ok.words);
    this.settings = reply.ok.settings;
    this.built = reply.ok.state;
    if (this.#state.backdrop === 'checker') this.#state = { ...this.#state, backdrop: reply.ok.preferences.backdrop };
    this.#checks.forget();
    this.#changed();
    // Who asks for it below hears of a failure.
    this.#startBench().catch(() => undefined);
    // A small file comes as fast as a print.
    if (reply.ok.byteCount > FAST_BYTES)
      await Promise.race([first, new Promise((go) => setTimeout(go, FIRST_PRINT_MS))]);
    await this.#load();
  }

  close(): void {
    clearTimeout(this.#keeping);
    this.#starting?.then((bench) => bench.close()).catch(() => undefined);
    this.link.close();
  }

  get header() {
    return this.#bench?.header ?? this.takeover.header;
  }

  /** Why prints take longer here than they could; null where they do not. */
  get slow(): Problem | null {
    return this.#bench?.slow ?? null;
  }

  get treatment(): Treatment | null {
    return this.settings?.treatment ?? null;
  }

  get base(): Extent | null {
    return this.header?.extent ?? null;
  }

  /** Stops of the axis, from large to small; the same list while nothing that it hangs on changes. */
  get stops(): readonly Stop[] {
    const { base, treatment } = this;
    const { typed } = this.#state;
    if (base === null || treatment === null) return [];
    const known = this.#stops;
    if (known?.base === base && known.treatment === treatment && known.typed === typed) return known.stops;
    const stops = stopsOf(base, treatment.targets, typed, lastLevelOf(base, treatment));
    this.#stops = { base, treatment, typed, stops };
    return stops;
  }

  /** The image under the sight, where it stands on the axis, and its extent. */
  get seen(): {
    readonly image: PrintImage;
    readonly lod: number;
    readonly extent: Extent;
    readonly stop: Stop | null;
  } | null {
    const { base, stops } = this;
    const sight = this.#state.sight;
    if (base === null || stops.length === 0) return null;
    if (sight?.kind === 'lod') {
      const last = stops.filter((stop) => stop.kind === 'level').length - 1;
      const lod = Math.min(last, Math.max(0, sight.lod));
      const extent = extentAt(base, lod);
      return { image: { lod, extent }, lod, extent, stop: null };
    }
    const stop =
      stops.find((each) =>
        sight?.kind === 'target'
          ? each.label === sight.name && each.kind !== 'level'
          : 'level' in each.image && each.image.level === (sight?.level ?? openingLevel(base, this.treatment!)),
      ) ?? stops[0];
    return { image: stop.image, lod: stop.lod, extent: stop.extent, stop };
  }

  /** The treatment of a print; the same object while nothing that it hangs on changes. */
  treatmentOf(slot: Slot): Treatment | null {
    const { settings } = this;
    if (settings?.treatment == null) return null;
    const known = this.#treatments.get(slot);
    if (known?.settings === settings.treatment) return known.treatment;
    const treatment = treatmentOf(slot, settings.treatment, settings.origins);
    this.#treatments.set(slot, { settings: settings.treatment, treatment });
    return treatment;
  }

  get slot(): Slot {
    return this.#state.slots.find(({ id }) => id === this.#state.selected) ?? this.#state.slots[0];
  }

  /** Distances, where somebody said how dense the texels lie. */
  get outlook(): Outlook | null {
    const { open, treatment } = this;
    if (open === null || treatment === null) return null;
    const texelsPerMeter = this.#state.texelsPerMeter ?? treatment.view.texelsPerMeter;
    if (texelsPerMeter === null) return null;
    return { texelsPerMeter, ...this.lens };
  }

  /** Field of view and screen: as typed here, as the settings say, else as the editor prefers. */
  get lens(): { readonly fovY: number; readonly screenHeight: number } {
    const said = (key: string): boolean =>
      this.settings?.origins.some((each) => each.key === key && each.rule !== 'built-in') ?? false;
    const { fovY = 60, screenHeight = 1080 } = this.open?.preferences ?? {};
    const view = this.treatment?.view;
    return {
      fovY: this.#state.fovY ?? (said('view.fovY') ? view!.fovY : fovY),
      screenHeight: this.#state.screenHeight ?? (said('view.screenHeight') ? view!.screenHeight : screenHeight),
    };
  }

  /** What of the build's outputs prints of an image show: the chosen one where there is such. */
  outputAt(image: PrintImage): Output {
    const { treatment } = this;
    const { output } = this.#state;
    return treatment !== null && outputsOf(treatment, image).includes(output) ? output : 'image';
  }

  /** How prints are shown: outputs beside the image have channels of their own. */
  get show(): Show {
    const { seen } = this;
    const { show } = this.#state;
    const beside = seen !== null && this.outputAt(seen.image) !== 'image';
    return beside && show !== 'difference' ? 'color' : show;
  }

  /** The print of an image, in the output that is looked at. */
  print(treatment: Treatment, image: PrintImage): Told<'print'> {
    const told = this.#bench?.told(this.printWant(treatment, image));
    return told ?? (this.outputAt(image) === 'image' ? this.takeover.printOf(treatment, image) : undefined);
  }

  printWant(treatment: Treatment, image: PrintImage): Want & { readonly kind: 'print' } {
    const output = this.outputAt(image);
    return { kind: 'print', treatment, image, ...(output !== 'image' && { output }) };
  }

  pixelsWant(treatment: Treatment, image: PrintImage): Want & { readonly kind: 'pixels' } {
    return { ...this.printWant(treatment, image), kind: 'pixels' };
  }

  /** The image itself, whatever is looked at. */
  imagePrint(treatment: Treatment, image: PrintImage): Told<'print'> {
    return this.#bench?.told({ kind: 'print', treatment, image }) ?? this.takeover.printOf(treatment, image);
  }

  levels(): LevelsAnswer | null {
    const { treatment } = this;
    const told = treatment === null ? undefined : this.#bench?.told({ kind: 'levels', treatment });
    return told === undefined || isProblem(told) ? null : told;
  }

  halo(treatment: Treatment, image: PrintImage): HaloAnswer | null {
    const told = this.#bench?.told({ kind: 'halo', treatment, image });
    return told === undefined || isProblem(told) ? null : told;
  }

  /** Marks of overshoot on what is looked at; null where there are none. */
  marks(treatment: Treatment, image: PrintImage): Uint16Array | null {
    return this.outputAt(image) === 'image' ? (this.halo(treatment, image)?.marks ?? null) : null;
  }

  /** The pixel hash of a print, in the output that is looked at, as the page's own worker found it; empty until it has. */
  pixels(treatment: Treatment, image: PrintImage): string {
    const told = this.#bench?.told(this.pixelsWant(treatment, image));
    return told === undefined || isProblem(told) ? '' : told.pixels;
  }

  /** An answer to any other want, null until there is one. */
  told<K extends 'art' | 'footprint' | 'section'>(want: Want & { readonly kind: K }) {
    const told = this.#bench?.told<K>(want);
    return told === undefined || isProblem(told) ? null : told;
  }

  want(wants: readonly Want[]): void {
    this.#bench?.want(wants);
  }

  /** What differences and comparisons take for the source at an image: the area mean, in the settings' own light. */
  sourcePrint(image: PrintImage): { readonly treatment: Treatment; readonly print: Print | null } | null {
    const { treatment } = this;
    if (treatment === null) return null;
    const mean = this.treatmentOf(SOURCE_MEAN)!;
    const told = this.print(mean, image);
    return { treatment: mean, print: told === undefined || isProblem(told) ? null : told };
  }

  /** Whether a print has the pixels that were built; null where that is not known. */
  equalsBuild(image: PrintImage, pixels: string): boolean | null {
    if (this.built.kind !== 'built' && this.built.kind !== 'stale') return null;
    return this.#checks.equals(image, this.outputAt(image), pixels);
  }

  /** The host's own print, while the file is still to come. */
  async #askFirst(): Promise<void> {
    this.takeover.reset();
    const { revision, reply } = await this.link.ask('firstPrint', openingOf(this.#state.sight));
    if ('problem' in reply) return;
    this.takeover.take(reply.ok.print, revision);
    this.#judgeFirst();
    this.#changed();
  }

  async #load(): Promise<void> {
    const { open } = this;
    if (open === null) return;
    const { reply, revision } = await this.link.ask('bytes', null);
    if ('problem' in reply) return this.#fail(reply.problem);
    this.present = true;
    this.takeover.arrive(revision);
    try {
      (await this.#startBench()).open(open.name, reply.ok.image, reply.ok.roughness);
    } catch (error) {
      const reason = error instanceof Error ? error.message : String(error);
      return this.#fail({ code: 'unexpected', severity: 'error', values: { reason } });
    }
    this.#changed();
  }

  /** The page's worker. It takes a while to start, and the file may still be on its way. */
  #startBench(): Promise<BenchLink> {
    if (this.#starting !== null) return this.#starting;
    const starting = this.#makeBench(() => this.#benchChanged());
    this.#starting = starting;
    starting.then(
      (bench) => {
        this.#bench = bench;
      },
      () => {
        this.#starting = null;
      },
    );
    return starting;
  }

  #benchChanged(): void {
    if (this.#bench?.problem != null) this.problem = this.#bench.problem;
    this.#judgeFirst();
    this.#changed();
  }

  #judgeFirst(): void {
    const { treatment } = this;
    const wanted = treatment === null ? null : this.takeover.wanted(treatment);
    const own = wanted === null ? undefined : this.#bench?.told(wanted);
    if (own !== undefined && !isProblem(own)) this.takeover.judge(own);
  }

  #fail(problem: Problem): void {
    this.problem = problem;
    this.#changed();
  }

  #take(event: HostEvent): void {
    switch (event.kind) {
      case 'source':
        this.present = event.present;
        if (event.present) {
          this.problem = null;
          void this.#load();
        }
        break;
      case 'settings': {
        const before = this.treatment?.normal.roughness;
        this.settings = event.settings;
        // The map comes with the file; another one is another file.
        if (JSON.stringify(before) !== JSON.stringify(this.treatment?.normal.roughness)) void this.#load();
        break;
      }
      case 'export':
        void exportProof(this, event.form);
        return;
      case 'preferences':
        this.#prefer(event.preferences);
        break;
      case 'built':
        this.built = event.state;
        this.#checks.forget();
        break;
    }
    this.#changed();
  }

  /** A backdrop that somebody chose here stays; one that was preferred follows. */
  #prefer(preferences: Preferences): void {
    const { open } = this;
    if (open === null) return;
    if (this.#state.backdrop === open.preferences.backdrop) {
      this.#state = { ...this.#state, backdrop: preferences.backdrop };
    }
    this.open = { ...open, preferences };
  }

  #changed(): void {
    this.dispatchEvent(new Event('change'));
  }
}

const SOURCE_MEAN: Slot = { id: -1, kernel: { name: 'even', params: {} }, change: {} };

/** Up to this many bytes a file crosses to the page as fast as a print. */
const FAST_BYTES = 2 ** 20;

/** Longest that a file waits for the host's first print, in milliseconds. */
const FIRST_PRINT_MS = 300;

function openingOf(sight: Sight | null): Opening {
  switch (sight?.kind) {
    case 'level':
      return { level: sight.level, target: null };
    case 'target':
      return { level: null, target: sight.name };
    case 'lod':
      return { level: Math.round(sight.lod), target: null };
    case undefined:
      return { level: null, target: null };
  }
}

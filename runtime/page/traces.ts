import type { Model } from '../model/model.js';
import type { SavedState } from '../model/savedState.js';
import type { Value } from '../model/values.js';
import type { Recording } from './recording.js';
import type { Signal } from './signals.js';

const MOST_MARKS = 512;
/** Characters of all marks together, at most: contents of memories may be long. */
const MOST_TEXT = 1 << 26;
/** Of the older marks, all but this share of the last ones, every second one may go. */
const FRESH_SHARE = 1 / 16;
/** Cycles from mark to mark, at least, and at most where nobody has looked. */
const NEAR = 32;
const FAR = 8192;
/** Of the time that passes, marks take at most this share. */
const MARK_SHARE = 0.1;

/**
 * Values of signals in cycles that have passed. Those of ports are recorded; those of inner nets
 * are found by running the cycles again from a state that was marked.
 */
export class Traces {
  readonly #viewer: Model;
  readonly #recording: Recording;
  #marks: { readonly cycle: number; readonly saved: SavedState }[] = [];
  /** By net, by cycle. */
  readonly #known = new Map<string, Map<number, Value>>();
  #viewerAt: number | undefined;
  /** The moment from which on a mark is affordable again. */
  #affordableAt = 0;
  /** Grows whenever a value has been found. */
  found = 0;

  constructor(viewer: Model, recording: Recording) {
    this.#viewer = viewer;
    this.#recording = recording;
  }

  /** Forgets everything. */
  restart(): void {
    this.#marks = [];
    this.forgetNow();
    this.#known.clear();
  }

  /** Says that the present cycle has other inputs than it had when it was looked at. */
  forgetNow(): void {
    this.#viewerAt = undefined;
  }

  /** Keeps the state that a model is in. */
  mark(model: Model): void {
    const last = this.#marks.at(-1);
    const started = performance.now();
    const passed = last === undefined ? FAR : model.cycle - last.cycle;
    if (passed < NEAR || (passed < FAR && started < this.#affordableAt)) return;
    const saved = model.save();
    this.#affordableAt = started + (performance.now() - started) / MARK_SHARE;
    this.#marks.push({ cycle: model.cycle, saved });
    const length = saved.state.length + (saved.memories?.length ?? 0);
    const most = Math.max(4, Math.min(MOST_MARKS, Math.floor(MOST_TEXT / length)));
    if (this.#marks.length <= most) return;
    const { first } = this.#recording;
    const fresh = most - Math.ceil(most * FRESH_SHARE);
    this.#marks = this.#marks.filter(
      ({ cycle }, i) => i >= fresh || (i % 2 === 1 && cycle >= first - FAR),
    );
  }

  /** Whether a cycle is far behind the last mark. */
  isFar(cycle: number): boolean {
    const last = this.#marks.at(-1);
    return last === undefined || cycle - last.cycle >= FAR;
  }

  /** The value in a cycle that has passed; undefined where it is not known yet. */
  value(signal: Signal, cycle: number): Value | undefined {
    if (!this.#recording.has(cycle)) return undefined;
    const { port, kind, name } = signal;
    if (port) return this.#recording.value(port, kind === 'input', cycle);
    return this.#known.get(name)?.get(cycle);
  }

  /** Finds values of nets in cycles from `from` to `to`, as many as there is time for. */
  fill(nets: readonly Signal[], from: number, to: number, until: number): void {
    const first = Math.max(from, this.#recording.first);
    const end = Math.min(to + 1, this.#recording.end);
    const wanted = nets.filter(({ port }) => port === undefined);
    if (wanted.length === 0) return;
    this.#drop(wanted, first, end);
    for (let cycle = first; cycle < end; cycle++) {
      if (wanted.every(({ name }) => this.#known.get(name)?.has(cycle))) continue;
      if (performance.now() > until || !this.#goTo(cycle, until)) return;
      for (const { name } of wanted) this.#remember(name, cycle, this.#viewer.peek(name));
    }
  }

  /** Brings the viewer to the start of a cycle, with the inputs that it had. */
  #goTo(cycle: number, until: number): boolean {
    let at = this.#viewerAt;
    const mark = this.#marks.findLast((each) => each.cycle <= cycle);
    if (at === undefined || at > cycle || (mark !== undefined && mark.cycle > at)) {
      if (mark === undefined) return false;
      this.#viewer.restore(mark.saved);
      at = mark.cycle;
    }
    while (at < cycle) {
      if (performance.now() > until || !this.#recording.has(at)) break;
      this.#viewer.runRows(1, this.#recording.inputRow(at), undefined, 0);
      at++;
    }
    this.#viewerAt = at;
    if (at < cycle) return false;
    this.#viewer.write(this.#inputsOf(cycle));
    return true;
  }

  #inputsOf(cycle: number): Record<string, Value> {
    const values = this.#viewer.inputs.map((port) => [
      port.name,
      this.#recording.value(port, true, cycle),
    ]);
    return Object.fromEntries(values);
  }

  #remember(name: string, cycle: number, value: Value): void {
    let known = this.#known.get(name);
    if (known === undefined) {
      known = new Map();
      this.#known.set(name, known);
    }
    known.set(cycle, value);
    this.found++;
  }

  // What is neither shown nor near is found again when it is wanted again.
  #drop(wanted: readonly Signal[], first: number, end: number): void {
    const names = new Set(wanted.map(({ name }) => name));
    for (const [name, known] of this.#known) {
      if (!names.has(name)) this.#known.delete(name);
      else if (known.size > 4 * (end - first) + 256) {
        for (const cycle of known.keys()) {
          if (cycle < first || cycle >= end) known.delete(cycle);
        }
      }
    }
  }
}

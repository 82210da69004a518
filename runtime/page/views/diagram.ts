import type { Value } from '../../model/values.js';
import type { Desk, View } from '../desk.js';
import { button, element, freshId, setText } from '../dom.js';
import type { Signal } from '../signals.js';
import { shownValue } from '../valueBase.js';
import { drawDiagram, ROW_HEIGHT, type Track } from './drawDiagram.js';

const WIDTHS = [3, 6, 12, 24, 48, 96];

interface Window {
  readonly first: number;
  readonly end: number;
  /** The present cycle when it was drawn. */
  readonly now: number;
}

/** The timing diagram: names and values at a cursor as text, the waves as a picture. */
export class Diagram implements View {
  readonly root: HTMLElement;
  readonly #desk: Desk;
  readonly #canvas: HTMLCanvasElement;
  readonly #names = element('div', { class: 'names' });
  readonly #where = element('span', { class: 'quiet' });
  /** Pixels of a cycle, as an index. */
  #zoom = 3;
  /** The cycle under the cursor; undefined for the present one. */
  #cursor: number | undefined;
  /** The last cycle in the picture; undefined to follow the present one. */
  #end: number | undefined;
  #signals: readonly Signal[] = [];
  #rows: { readonly value: HTMLElement; readonly signal: Signal }[] = [];
  #width = 600;
  #drawn: Window = { first: 0, end: 0, now: 0 };

  constructor(desk: Desk) {
    this.#desk = desk;
    this.#canvas = element('canvas', {
      tabindex: 0,
      role: 'slider',
      'aria-label': 'cycle at the cursor',
    });
    this.#canvas.addEventListener('keydown', (event) => this.#onKey(event));
    this.#canvas.addEventListener('pointermove', ({ offsetX }) => this.#pointAt(offsetX));
    this.#canvas.addEventListener('pointerdown', ({ offsetX }) => this.#pointAt(offsetX));
    this.#canvas.addEventListener('pointerleave', () => this.#setCursor(undefined));
    const id = freshId();
    this.root = element(
      'section',
      { 'aria-labelledby': id, class: 'diagram' },
      element(
        'div',
        { class: 'heading' },
        element('h2', { id }, 'Timing'),
        this.#where,
        element(
          'div',
          { class: 'group' },
          button('◂', () => this.#pan(-0.5), { 'aria-label': 'earlier' }),
          button('▸', () => this.#pan(0.5), { 'aria-label': 'later' }),
          button('now', () => this.follow()),
          button('−', () => this.#scale(-1), { 'aria-label': 'more cycles' }),
          button('+', () => this.#scale(1), { 'aria-label': 'fewer cycles' }),
        ),
      ),
      element('div', { class: 'waves' }, this.#names, this.#canvas),
    );
    new ResizeObserver(([entry]) => {
      this.#width = Math.max(120, Math.floor(entry!.contentRect.width));
      desk.refresh();
    }).observe(this.#canvas);
  }

  /** Cycles that fit into the picture, the present one included. */
  get visible(): number {
    return Math.max(2, Math.floor(this.#width / WIDTHS[this.#zoom]!));
  }

  /** Shows the present again. */
  follow(): void {
    this.#end = undefined;
    this.#desk.refresh();
  }

  /** Finds values of inner nets for the picture as it was drawn, and adds them to it. */
  lookBack(until: number): void {
    const { traces } = this.#desk.session;
    const before = traces.found;
    traces.fill(this.#signals, this.#drawn.first, this.#drawn.end, until);
    if (traces.found !== before) this.#draw();
  }

  update(): void {
    this.#adopt();
    this.#drawn = this.#window();
    this.#draw();
  }

  #draw(): void {
    const { session } = this.#desk;
    const { first, end } = this.#drawn;
    const tracks = this.#signals.map(
      (signal): Track => ({ signal, values: this.#values(signal, first, end) }),
    );
    drawDiagram(this.#canvas, {
      tracks,
      first,
      width: this.#width,
      cycleWidth: WIDTHS[this.#zoom]!,
      cursor: this.#cursor,
      now: this.#drawn.now,
      base: this.#desk.base,
    });
    const at = this.#cursorCycle();
    setText(this.#where, `at cycle ${at.toLocaleString('en-US')}`);
    this.#canvas.setAttribute('aria-valuenow', `${at}`);
    this.#canvas.setAttribute('aria-valuemin', `${Math.max(0, session.recording.first)}`);
    this.#canvas.setAttribute('aria-valuemax', `${session.model.cycle}`);
    for (const { signal, value } of this.#rows) {
      const now = this.#valueAt(signal, at);
      setText(value, now === undefined ? '' : shownValue(now, signal.width, this.#desk.base));
      value.classList.toggle('unknown', typeof now === 'string');
    }
  }

  #values(signal: Signal, first: number, end: number): (Value | undefined)[] {
    const values: (Value | undefined)[] = [];
    for (let cycle = first; cycle <= end; cycle++) values.push(this.#valueAt(signal, cycle));
    return values;
  }

  #valueAt(signal: Signal, cycle: number): Value | undefined {
    const { model, traces, fault } = this.#desk.session;
    if (cycle !== model.cycle) return traces.value(signal, cycle);
    return fault === undefined ? model.peek(signal.name) : undefined;
  }

  /** Lays out the rows anew where other signals are shown. */
  #adopt(): void {
    const { session } = this.#desk;
    const wanted = session.shown.flatMap((name) => session.signal(name) ?? []);
    if (wanted.length === this.#signals.length && wanted.every((s, i) => s === this.#signals[i])) {
      return;
    }
    this.#signals = wanted;
    this.#rows = wanted.map((signal) => ({ signal, value: element('span', { class: 'value' }) }));
    this.#names.replaceChildren(
      element('div', { class: 'ruler' }),
      ...this.#rows.map(({ signal, value }) => this.#row(signal, value)),
    );
    this.#canvas.style.height = `${ROW_HEIGHT * (wanted.length + 1)}px`;
  }

  #row({ name }: Signal, value: HTMLElement): HTMLElement {
    const remove = button(
      '×',
      () => {
        this.#desk.session.show(name, false);
        this.#desk.refresh();
      },
      { 'aria-label': `take ${name} out of the diagram` },
    );
    return element(
      'div',
      { class: 'track' },
      element('span', { class: 'name', title: name }, element('bdi', {}, name)),
      value,
      remove,
    );
  }

  /** The cycles of a picture; those behind the present one are blank. */
  #window(): Window {
    const { model, recording } = this.#desk.session;
    const last = Math.min(this.#end ?? model.cycle, model.cycle);
    const first = Math.max(recording.first, last - this.visible + 1);
    return { first, end: first + this.visible - 1, now: model.cycle };
  }

  #cursorCycle(): number {
    const { first, end, now } = this.#drawn;
    const last = Math.min(end, now);
    return Math.min(Math.max(this.#cursor ?? last, first), last);
  }

  #setCursor(cycle: number | undefined): void {
    this.#cursor = cycle;
    this.#desk.refresh();
  }

  #pointAt(x: number): void {
    this.#setCursor(this.#drawn.first + Math.floor(x / WIDTHS[this.#zoom]!));
  }

  #pan(share: number): void {
    const { first, end } = this.#window();
    this.#end = Math.max(first, end + Math.round(share * this.visible));
    if (this.#end >= this.#desk.session.model.cycle) this.#end = undefined;
    this.#desk.refresh();
  }

  #scale(by: number): void {
    this.#zoom = Math.max(0, Math.min(WIDTHS.length - 1, this.#zoom + by));
    this.#desk.refresh();
  }

  #onKey(event: KeyboardEvent): void {
    const by = { ArrowLeft: -1, ArrowRight: 1, PageUp: -10, PageDown: 10 }[event.key];
    const { model, recording } = this.#desk.session;
    if (by === undefined && event.key !== 'Home' && event.key !== 'End') return;
    event.preventDefault();
    const goal =
      event.key === 'Home'
        ? recording.first
        : event.key === 'End'
          ? model.cycle
          : this.#cursorCycle() + by!;
    const cycle = Math.max(recording.first, Math.min(model.cycle, goal));
    const { first, end } = this.#window();
    if (cycle > end) this.#end = cycle >= model.cycle ? undefined : cycle;
    else if (cycle < first) this.#end = cycle + this.visible - 1;
    this.#setCursor(cycle);
  }
}

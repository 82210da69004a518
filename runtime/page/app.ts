import type { Desk, View } from './desk.js';
import { element } from './dom.js';
import type { Session } from './session.js';
import type { Base } from './valueBase.js';
import { Diagram } from './views/diagram.js';
import { files } from './views/files.js';
import { inputPanel } from './views/inputs.js';
import { netPanel } from './views/nets.js';
import { outputPanel } from './views/outputs.js';
import { toolbar } from './views/toolbar.js';

/** Time of a frame that cycles may take, at least and at most, and that looking back may take. */
const LEAST_RUN_MS = 2;
const MOST_RUN_MS = 8;
const LOOK_MS = 3;
/** A frame that took longer came late. */
const LATE_MS = 20;
/** Cycles in a frame beyond which single ones cannot be followed by eye. */
const SWIFT = 64;
/** How often parts that cannot be followed anyway are brought up to date while it is swift. */
const SWIFT_MS = 120;

/** The page: its parts, and the loop that lets time pass. */
export class App implements Desk {
  readonly session: Session;
  base: Base = 'hex';
  isRunning = false;
  rate = Number.POSITIVE_INFINITY;
  measured = 0;
  readonly #status = element('p', { role: 'status', class: 'status' });
  readonly #views: View[] = [];
  readonly #diagram: Diagram;
  #owed = 0;
  #last = 0;
  #runMs = MOST_RUN_MS;
  #shownAt = 0;
  #isStale = true;
  /** The fault that the user knows of. */
  #told: string | undefined;
  #rateStart = { at: 0, cycle: 0 };

  constructor(session: Session) {
    this.session = session;
    this.#diagram = new Diagram(this);
  }

  /** Puts the page together. */
  mount(target: HTMLElement): void {
    const bar = toolbar(this);
    const inputs = inputPanel(this);
    const outputs = outputPanel(this);
    const nets = netPanel(this);
    const transfer = files(this);
    this.#views.push(bar, inputs, outputs, this.#diagram, nets, transfer);
    const { model, about } = this.session;
    const facts = [
      `${about.gates.toLocaleString('en-US')} gates`,
      `${about.registers.toLocaleString('en-US')} registers`,
      model.clocks.length === 0 ? 'no clock' : `clock ${model.clocks.join(', ')}`,
      ...(this.session.threeValued ? ['with x'] : []),
    ];
    target.replaceChildren(
      element(
        'header',
        {},
        element('h1', {}, model.name),
        element('p', { class: 'quiet' }, facts.join(' · ')),
      ),
      bar.root,
      this.#status,
      element(
        'main',
        {},
        element('div', { class: 'ports' }, inputs.root, outputs.root),
        element('div', { class: 'inside' }, this.#diagram.root, nets.root, transfer.root),
      ),
      element(
        'footer',
        { class: 'quiet' },
        `Packed by clockstride ${about.version}. Zero-delay, cycle-accurate: this page says nothing ` +
          'about timing and is no sign-off.',
      ),
    );
    requestAnimationFrame((time) => this.#frame(time));
  }

  say(text: string, isProblem = false): void {
    this.#status.textContent = text;
    this.#status.classList.toggle('problem', isProblem);
  }

  refresh(): void {
    this.#isStale = true;
  }

  step(cycles: number): void {
    this.session.advance(cycles, this.#diagram.visible);
    this.#diagram.follow();
    this.#tellFault();
    this.refresh();
  }

  run(isRunning: boolean): void {
    this.isRunning = isRunning;
    this.#owed = 0;
    this.#rateStart = { at: performance.now(), cycle: this.session.model.cycle };
    this.measured = 0;
    if (isRunning) this.#diagram.follow();
    else this.say(`Stopped at cycle ${this.session.model.cycle.toLocaleString('en-US')}.`);
    this.refresh();
  }

  reset(): void {
    this.session.reset();
    this.#rateStart = { at: performance.now(), cycle: 0 };
    this.#diagram.follow();
    this.say('Back at power-up.');
    this.refresh();
  }

  #frame(time: number): void {
    const passed = Math.min(100, time - this.#last);
    this.#last = time;
    try {
      this.#pass(time, passed);
    } catch (error) {
      // A fault of the page must not leave it dead.
      this.isRunning = false;
      this.say(`Something went wrong in this page: ${error}`, true);
    }
    requestAnimationFrame((next) => this.#frame(next));
  }

  #pass(time: number, passed: number): void {
    // On a busy machine the picture comes first.
    const fitting = passed > LATE_MS ? this.#runMs * 0.8 : this.#runMs + 0.1;
    this.#runMs = Math.max(LEAST_RUN_MS, Math.min(MOST_RUN_MS, fitting));
    const before = this.session.model.cycle;
    if (this.isRunning) this.#advance(passed);
    const isSwift = this.session.model.cycle - before > SWIFT;
    if (this.isRunning && this.session.model.cycle !== before) this.#isStale = true;
    if (this.#isStale && (!isSwift || time - this.#shownAt > SWIFT_MS)) {
      this.#isStale = false;
      this.#shownAt = time;
      this.session.look();
      this.#tellFault();
      for (const view of this.#views) view.update();
    } else if (this.#isStale) {
      // The count of cycles moves in every frame; the rest may wait.
      this.#views[0]!.update();
    }
    this.#diagram.lookBack(performance.now() + LOOK_MS);
  }

  #advance(passed: number): void {
    const isFree = this.rate === Number.POSITIVE_INFINITY;
    const room = Math.max(16, Math.floor(this.#runMs / Math.max(1e-6, this.session.cycleMs)));
    this.#owed += isFree ? room : (this.rate * passed) / 1000;
    const cycles = Math.min(Math.floor(this.#owed), room);
    // What a frame has no time for is not made up for later.
    this.#owed = Math.min(this.#owed - cycles, 1);
    this.session.advance(cycles, this.#diagram.visible);
    this.#measure();
    this.#tellFault();
  }

  #measure(): void {
    const now = performance.now();
    const { cycle } = this.session.model;
    const took = now - this.#rateStart.at;
    if (took < 500) return;
    this.measured = ((cycle - this.#rateStart.cycle) * 1000) / took;
    this.#rateStart = { at: now, cycle };
  }

  #tellFault(): void {
    const { fault } = this.session;
    if (fault === this.#told) return;
    this.#told = fault;
    if (this.isRunning) this.run(false);
    this.say(fault ?? '', fault !== undefined);
  }
}

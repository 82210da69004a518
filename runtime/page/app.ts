import type { Desk, View } from './desk.js';
import { element } from './dom.js';
import { Pace } from './pace.js';
import type { Session } from './session.js';
import type { Base } from './valueBase.js';
import { Diagram } from './views/diagram.js';
import { files } from './views/files.js';
import { inputPanel } from './views/inputs.js';
import { memoryPanel } from './views/memories.js';
import { netPanel } from './views/nets.js';
import { outputPanel } from './views/outputs.js';
import { toolbar } from './views/toolbar.js';

/** Time of a frame that looking back may take, and time that a leap may take at once. */
const LOOK_MS = 3;
const LEAP_MS = 50;
/** Cycles in a frame beyond which single ones cannot be followed by eye. */
const SWIFT = 64;
/** How often parts that cannot be followed anyway are brought up to date while it is swift. */
const SWIFT_MS = 120;
/** How often the picture changes while it runs, for those who asked for less motion. */
const CALM_MS = 500;

/** The page: its parts, and the loop that lets time pass. */
export class App implements Desk {
  readonly session: Session;
  base: Base = 'hex';
  isRunning = false;
  measured = 0;
  readonly #status = element('p', { role: 'status', class: 'status' });
  readonly #views: View[] = [];
  readonly #diagram: Diagram;
  readonly #pace = new Pace();
  readonly #calm = matchMedia('(prefers-reduced-motion: reduce)');
  /** The cycle at which a leap ends. */
  #goal: number | undefined;
  #last = 0;
  #shownAt = 0;
  #isStale = true;
  /** The fault that the user knows of. */
  #told: string | undefined;
  #rateStart = { at: 0, cycle: 0 };

  constructor(session: Session) {
    this.session = session;
    this.#diagram = new Diagram(this);
  }

  get rate(): number {
    return this.#pace.rate;
  }

  set rate(rate: number) {
    this.#pace.rate = rate;
  }

  /** Puts the page together. */
  mount(target: HTMLElement): void {
    const bar = toolbar(this);
    const inputs = inputPanel(this);
    const outputs = outputPanel(this);
    const nets = netPanel(this);
    const memories = memoryPanel(this);
    const transfer = files(this);
    this.#views.push(bar, inputs, outputs, this.#diagram, nets, memories, transfer);
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
        element(
          'div',
          { class: 'inside' },
          this.#diagram.root,
          nets.root,
          memories.root,
          transfer.root,
        ),
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

  leap(cycles: number): void {
    const { session } = this;
    const from = this.#goal ?? session.model.cycle;
    this.#goal = from + cycles;
    session.advance(cycles, this.#diagram.visible, performance.now() + LEAP_MS);
    this.#diagram.follow();
    this.#tellFault();
    if (session.fault !== undefined) this.#goal = undefined;
    else if (session.model.cycle >= this.#goal) this.#land();
    else if (!this.isRunning) this.run(true);
    this.refresh();
  }

  run(isRunning: boolean): void {
    this.isRunning = isRunning;
    this.#pace.restart();
    this.#rateStart = { at: performance.now(), cycle: this.session.model.cycle };
    this.measured = 0;
    if (isRunning) this.#diagram.follow();
    else {
      this.#goal = undefined;
      this.say(`Stopped at cycle ${this.session.model.cycle.toLocaleString('en-US')}.`);
    }
    this.refresh();
  }

  reset(): void {
    this.session.reset();
    this.#goal = undefined;
    this.#rateStart = { at: performance.now(), cycle: 0 };
    this.#diagram.follow();
    this.say('Back at power-up.');
    this.refresh();
  }

  #frame(time: number): void {
    this.#pace.frame(time - this.#last);
    this.#last = time;
    try {
      this.#pass(time);
    } catch (error) {
      // A fault of the page must not leave it dead.
      this.isRunning = false;
      this.say(`Something went wrong in this page: ${error}`, true);
    }
    requestAnimationFrame((next) => this.#frame(next));
  }

  #pass(time: number): void {
    const before = this.session.model.cycle;
    if (this.isRunning) this.#advance();
    const moved = this.session.model.cycle - before;
    if (moved > 0) this.#isStale = true;
    if (this.#isStale && time - this.#shownAt >= this.#restMs(moved)) {
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

  /** Milliseconds that a picture stays while cycles pass. */
  #restMs(moved: number): number {
    if (this.isRunning && this.#calm.matches) return CALM_MS;
    return moved > SWIFT ? SWIFT_MS : 0;
  }

  #advance(): void {
    const { session } = this;
    const pace = this.#pace;
    const goal = this.#goal;
    const cycles =
      goal === undefined
        ? pace.take(session.cycleMs)
        : Math.min(goal - session.model.cycle, pace.room(session.cycleMs));
    // Measured costs are of the past; the clock has the last word.
    session.advance(cycles, this.#diagram.visible, performance.now() + pace.runMs);
    this.#measure();
    this.#tellFault();
    if (goal !== undefined && session.model.cycle >= goal) {
      this.run(false);
      this.#land();
    }
  }

  /** Ends a leap. */
  #land(): void {
    this.#goal = undefined;
    this.say(`Leapt to cycle ${this.session.model.cycle.toLocaleString('en-US')}.`);
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

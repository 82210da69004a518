import type { Session } from './session.js';
import type { Base } from './valueBase.js';

/** A part of the page that shows what the model is. */
export interface View {
  readonly root: HTMLElement;
  /** Shows the present; called at most once a frame. */
  update(): void;
}

/** What parts of the page can see and do. */
export interface Desk {
  readonly session: Session;
  base: Base;
  readonly isRunning: boolean;
  /** Cycles a second while running; Infinity for as many as there is time for. */
  rate: number;
  /** Cycles a second of late. */
  readonly measured: number;
  /** Says something to the user, and to those who hear the page. */
  say(text: string, isProblem?: boolean): void;
  /** Says that something has changed; it is shown in the next frame. */
  refresh(): void;
  /** Lets a few cycles pass at once. */
  step(cycles: number): void;
  /** Lets many cycles pass, as fast as the page can while it stays alive. */
  leap(cycles: number): void;
  /** Starts and stops running. */
  run(isRunning: boolean): void;
  /** Back to power-up. */
  reset(): void;
}

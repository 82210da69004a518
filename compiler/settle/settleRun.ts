import { rowStride } from '../../runtime/layout.js';
import { powerUpState } from '../circuit/powerUp.js';
import { X } from '../circuit/values.js';
import { type Design, programsOf } from '../compile.js';
import { BytecodeEngine } from '../interpret/bytecodeEngine.js';
import type { LaneMachine } from './lanes/laneMachine.js';
import { LaneRunner } from './lanes/laneRunner.js';
import { MemberCourse } from './memberCourse.js';
import { type Moving, Repetition } from './repetition.js';
import type { Witness } from './settleReport.js';

/**
 * A design run from an unknown power-up, with three values, and from random power-ups in lanes,
 * cycle by cycle with the same inputs; and what was seen of its state elements on the way.
 */
export class SettleRun {
  cycles = 0;
  /** The elements that are x in the three-valued run. */
  readonly unknown: MemberCourse;
  /** The elements on which lanes differ. */
  readonly differing: MemberCourse;
  readonly unknownRepetition: Repetition<Uint8Array>;
  readonly laneRepetition: Repetition<readonly Int32Array[]>;
  /** Per element, the lanes that differed last. */
  readonly witnesses: (Witness | undefined)[];
  readonly runner: LaneRunner;
  /** The three-valued state: 0, 1, or 2 for x. */
  state: Uint8Array;
  readonly #engine: BytecodeEngine;
  readonly #unknownState: Moving<Uint8Array>;
  /** Words of a two-valued row, and a three-valued one of which no bit is x. */
  readonly #words: number;
  readonly #row: Uint32Array;

  /** Lane i of the machine starts at `powerUpState(circuit, 'random', seed + i)`. */
  constructor(design: Design, machine: LaneMachine, lanes: number, seed: bigint) {
    const { circuit, layout, schedule } = design;
    const threeValued = { ...layout, threeValued: true };
    this.#engine = new BytecodeEngine(programsOf({ ...design, layout: threeValued }), threeValued);
    this.#words = layout.inputs.words;
    this.#row = new Uint32Array(rowStride(layout.inputs, true));
    this.runner = new LaneRunner(machine, layout, lanes, (lane) =>
      powerUpState(circuit, 'random', seed + BigInt(lane)),
    );
    this.state = powerUpState(circuit, 'unknown');
    this.#engine.reset(this.state);
    this.#unknownState = {
      snapshot: () => this.state,
      isAt: (snapshot) => this.state.every((value, element) => value === snapshot[element]),
    };
    this.unknown = new MemberCourse(this.state.length);
    this.differing = new MemberCourse(this.state.length);
    this.witnesses = new Array(this.state.length);
    this.unknownRepetition = new Repetition(schedule.pattern.length);
    this.laneRepetition = new Repetition(schedule.pattern.length);
    this.#look(false);
  }

  /**
   * Runs one cycle with the packed, two-valued stimulus row at word `at` of `rows`. `isHeld` tells
   * that the row is the same as the one before and will stay so.
   */
  run(rows: Uint32Array, at: number, isHeld: boolean): void {
    const row = rows.subarray(at, at + this.#words);
    this.#row.set(row);
    this.#engine.run(1, this.#row, 0, undefined);
    this.state = this.#engine.state();
    this.runner.run(row);
    this.cycles++;
    this.#look(isHeld);
  }

  /** Cycles after which neither set has changed so far. */
  get unchangedAfter(): number {
    return Math.max(this.unknown.changedAfter, this.differing.changedAfter);
  }

  #look(isFree: boolean): void {
    this.#noteUnknown();
    this.#noteDiffering();
    this.unknownRepetition.look(this.cycles, this.#unknownState, isFree);
    this.laneRepetition.look(this.cycles, this.runner, isFree);
  }

  #noteUnknown(): void {
    const members: number[] = [];
    this.state.forEach((value, element) => {
      if (value === X) members.push(element);
    });
    this.unknown.note(this.cycles, members);
  }

  #noteDiffering(): void {
    const members: number[] = [];
    const lane = this.runner.firstRunning;
    if (lane >= 0) {
      this.runner.eachDifference(lane, (element, other, value) => {
        members.push(element);
        this.witnesses[element] = {
          lanes: [lane, other],
          values: [value, 1 - value],
          after: this.cycles,
        };
      });
    }
    this.differing.note(this.cycles, members);
  }
}

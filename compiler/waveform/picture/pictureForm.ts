import { ClockLevels } from '../clockLevels.js';
import { signalName } from '../signalList.js';
import type { WaveForm, WaveRequest, WaveRows, WaveSink } from '../wave.js';
import { wavesOf } from '../waves.js';
import { Courses, type Stretch } from './courses.js';
import { timingDiagram } from './timingDiagram.js';

/** The most that a picture can show and still be looked at. */
export const MOST_SHOWN = { signals: 120, cycles: 1024 } as const;

/**
 * Waves as a timing diagram in SVG; see `timingDiagram`. Takes at most `MOST_SHOWN` signals;
 * cycles beyond those are left out.
 */
export const pictureForm: WaveForm = (request) => new PictureSink(request);

class PictureSink implements WaveSink {
  readonly #request: WaveRequest;
  readonly #courses: Courses;
  #first = 0;
  #cycles = 0;

  constructor(request: WaveRequest) {
    const { count } = request.list;
    if (count > MOST_SHOWN.signals) {
      throw new RangeError(`a picture shows at most ${MOST_SHOWN.signals} signals, got ${count}`);
    }
    this.#request = request;
    this.#courses = new Courses(request.list);
  }

  // It can only be drawn when all of it is known.
  start(): Iterable<Uint8Array> {
    return [];
  }

  rows(rows: WaveRows): Iterable<Uint8Array> {
    if (this.#cycles === 0) this.#first = rows.firstCycle;
    const cycles = Math.min(rows.cycles, MOST_SHOWN.cycles - this.#cycles);
    this.#courses.add({ ...rows, cycles });
    this.#cycles += cycles;
    return [];
  }

  *end(): Generator<Uint8Array, void, undefined> {
    const { design, list } = this.#request;
    const { circuit } = design;
    const end = this.#first + this.#cycles;
    const { clock, ofSignal } = wavesOf(design, list);
    const lines = this.#courses.stretches.map((stretches, entry) => {
      const which = clock[ofSignal[entry]!]!;
      return {
        name: signalName(circuit.hierarchy, list, entry),
        isWord: list.width[entry]! > 1,
        stretches: which < 0 ? stretches : this.#clockStretches(which >> 1, which & 1),
      };
    });
    const svg = timingDiagram({ circuit: circuit.name, from: this.#first, to: end, lines });
    yield new TextEncoder().encode(svg);
  }

  /** The levels of a clock between its edges, in parts of cycles. */
  #clockStretches(clock: number, inverted: number): Stretch[] {
    const { clocks, schedule } = this.#request.design;
    const levels = new ClockLevels(clocks, schedule);
    const start = levels.sampleTime(this.#first);
    const units = levels.sampleTime(this.#first + 1) - start;
    const end = this.#first + this.#cycles;
    const textOf = (level: number): string => `${level ^ inverted}`;
    const stretches = [
      { from: this.#first, to: end, text: textOf(levels.levelAt(this.#first, clock)) },
    ];
    for (let cycle = this.#first; cycle < end; cycle++) {
      for (const move of levels.moves(cycle)) {
        if (move.clock !== clock) continue;
        const from = this.#first + (move.time - start) / units;
        stretches.at(-1)!.to = from;
        stretches.push({ from, to: end, text: textOf(move.level) });
      }
    }
    return stretches.filter(({ from, to }) => from < to);
  }
}

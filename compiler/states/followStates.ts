import { WholeFile } from '../../runtime/node/wholeFile.js';
import { figure } from '../report/figures.js';
import type {
  Findings,
  Outlet,
  OutletBlock,
  OutletContext,
  OutletPlan,
  RunEnd,
} from '../run/outlets/outlet.js';
import type { StatesSummary } from '../run/outlets/statesSummary.js';
import { MOST_STATES, MOST_TRANSITIONS, type SavedStates, StateCourse } from './stateCourse.js';
import type { StateVector } from './stateVectors.js';

/** A file that tells of states: what is written for the states of a circuit after some cycles. */
export interface StatesFile {
  readonly path: string;
  readonly write: (
    circuit: string,
    cycles: number,
    registers: readonly StatesSummary[],
  ) => string | Promise<string>;
}

/**
 * Follows state vectors: the states that they are in and the transitions between them, as they are
 * when outputs are sampled. Gives `RunSummary.states`, and files, which appear when the run is over.
 *
 * A vector with more than 4,096 states or 65,536 transitions is followed up to there; a note says so.
 */
export function followStates(
  vectors: readonly StateVector[],
  files: readonly StatesFile[] = [],
): OutletPlan {
  return {
    watch: vectors.flatMap(({ nets }) => Array.from(nets)),
    open: (context) => new StatesOutlet(vectors, files, context),
  };
}

class StatesOutlet implements Outlet {
  readonly wantsResponse = true;
  readonly #courses: readonly StateCourse[];
  readonly #files: (StatesFile & { readonly file: WholeFile })[] = [];
  readonly #circuit: string;

  constructor(
    vectors: readonly StateVector[],
    files: readonly StatesFile[],
    { design, watched, saved }: OutletContext,
  ) {
    this.#circuit = design.circuit.name;
    let offset = 0;
    this.#courses = vectors.map((vector, i) => {
      const { nets } = vector;
      const course = new StateCourse(vector, offset, watched);
      offset += nets.length;
      const before = (saved as readonly SavedStates[] | undefined)?.[i];
      if (before !== undefined) course.restore(before);
      return course;
    });
    try {
      for (const each of files) this.#files.push({ ...each, file: new WholeFile(each.path) });
    } catch (error) {
      this.discard();
      throw error;
    }
  }

  save(): SavedStates[] {
    return this.#courses.map((course) => course.save());
  }

  take(block: OutletBlock): undefined {
    for (const course of this.#courses) course.take(block);
  }

  async finish({ cycles }: RunEnd): Promise<Findings> {
    const states = this.#courses.map((course) => course.summary());
    for (const { write, file } of this.#files) {
      file.put(new TextEncoder().encode(await write(this.#circuit, cycles, states)));
    }
    const notes = states.flatMap(({ register, followedTo }) =>
      followedTo === undefined ? [] : [tooMany(register, followedTo)],
    );
    return { states, notes };
  }

  keep(): void {
    for (const { file } of this.#files) file.finish();
  }

  discard(): void {
    for (const { file } of this.#files) file.discard();
  }
}

function tooMany(register: string, followedTo: number): string {
  return (
    `${register} has more than ${figure(MOST_STATES)} states or ${figure(MOST_TRANSITIONS)} ` +
    `transitions: it was followed up to cycle ${figure(followedTo)}; choose fewer of its bits, as ` +
    'in counter[3:0]'
  );
}

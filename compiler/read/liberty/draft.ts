import { type BusStyle, busStyleOf } from './bitRange.js';
import type { LibertyPin, LibertyPort, LibertyProblem, LibertyVector } from './cell.js';
import type { LibertyGroup } from './syntax.js';

/** A cell that is being read: its pins so far, and what is wrong with it. */
export class CellDraft {
  readonly pins: LibertyPin[] = [];
  readonly ports: LibertyPort[] = [];
  readonly vectors: LibertyVector[] = [];
  readonly aliases = new Map<string, string>();
  readonly problems: LibertyProblem[] = [];
  readonly #cell: LibertyGroup;
  readonly #library: LibertyGroup;
  readonly #names = new Set<string>();

  constructor(cell: LibertyGroup, library: LibertyGroup) {
    this.#cell = cell;
    this.#library = library;
  }

  /** The last `type` group of a name before this place. */
  type(name: string): LibertyGroup | undefined {
    const isMeant = ({ kind, names }: LibertyGroup) => kind === 'type' && names[0]?.text === name;
    return this.#cell.groups.findLast(isMeant) ?? this.#library.groups.findLast(isMeant);
  }

  /** How the library writes names of bits. */
  get style(): BusStyle {
    return busStyleOf(this.#library.attributes.get('bus_naming_style')?.[0]?.text);
  }

  /** Puts a problem on record; it is reported if the cell is used. */
  report(code: LibertyProblem['code'], message: string, { start, end }: Place): void {
    this.problems.push({ code, message, start, end });
  }

  /** Whether a pin, bus or bundle may have a name; reports it if another has it. */
  isFree(name: string, place: Place): boolean {
    if (!this.#names.has(name)) {
      this.#names.add(name);
      return true;
    }
    this.report('name-redeclared', `pin ${name} is described twice; remove one of the two`, place);
    return false;
  }
}

type Place = Pick<LibertyProblem, 'start' | 'end'>;

import { type Engine, RunFault } from '../../../runtime/engine.js';
import { type RowLayout, rowStride } from '../../../runtime/layout.js';
import type { Departure, ResponseChecker } from '../../../runtime/node/index.js';
import { RowComparison } from '../../../runtime/node/rowComparison.js';
import type { RunBlock } from '../../../runtime/stream.js';
import { type PowerUp, powerUpState } from '../../circuit/powerUp.js';
import { powerUpMemories } from '../../circuit/powerUpMemory.js';
import type { Design } from '../../compile.js';
import type { Emitter } from '../../emit/emitter.js';
import { createEngine, type EngineName } from '../../engines.js';
import { matchPorts, type PortMatch } from '../portMatch.js';
import { RowMapper } from '../rowMapper.js';
import { Comparison, type DepartureOptions } from './comparison.js';
import type { Findings, OutletPlan, RunEnd } from './outlet.js';

/** How two designs are run beside each other. */
export interface CompareDesignOptions extends DepartureOptions {
  readonly engine: EngineName;
  /** As for the run itself. */
  readonly powerUp: PowerUp;
  readonly seed: number | bigint;
  /** An emitter that has been started before. */
  readonly emitter?: Emitter;
}

/**
 * Compares the response with that of another design, which runs in lock step on the same stimulus.
 *
 * Ports are matched by name; outputs that only one has are not compared, of which a note tells.
 * With random power-up, registers of one name start alike. `name` is that of the other design in
 * messages. Throws RangeError, which lists all differences, where inputs differ, an output has
 * another width, or no output is common.
 */
export function compareDesign(
  design: Design,
  other: Design,
  name: string,
  options: CompareDesignOptions,
): OutletPlan {
  const match = matchPorts(design.layout, other.layout);
  if (!match.isUsable) {
    const lacking = match.common.length === 0 ? ['no output is common to both'] : [];
    throw new RangeError([...match.differences, ...lacking].join('; '));
  }
  return {
    open: async () => {
      const start = startOf(design, other, options);
      const engine = await createEngine(other, options.engine, options.emitter, start);
      engine.reset(start);
      powerUpMemories(engine, other.circuit, options.powerUp, options.seed);
      const checker = new DesignExpectation(design, engine, match, name);
      return new DesignComparison(checker, options, match.differences);
    },
  };
}

// With random power-up, what a register starts with depends on its place among the others.
function startOf(
  design: Design,
  other: Design,
  { powerUp, seed }: CompareDesignOptions,
): Uint8Array {
  const state = powerUpState(other.circuit, powerUp, seed);
  if (powerUp !== 'random') return state;
  const own = powerUpState(design.circuit, powerUp, seed);
  const byName = new Map(design.layout.stateNames.map((name, i) => [name, own[i]!]));
  other.layout.stateNames.forEach((name, i) => {
    state[i] = byName.get(name) ?? state[i]!;
  });
  return state;
}

class DesignComparison extends Comparison {
  readonly #differences: readonly string[];

  constructor(checker: ResponseChecker, options: DepartureOptions, differences: readonly string[]) {
    super(checker, options);
    this.#differences = differences;
  }

  override async finish(end: RunEnd): Promise<Findings> {
    const findings = await super.finish(end);
    if (this.#differences.length === 0) return findings;
    const note = `the netlists differ in their ports: ${this.#differences.join('; ')}`;
    return { ...findings, notes: [...(findings.notes ?? []), note] };
  }
}

/** Another design as what is expected. */
class DesignExpectation implements ResponseChecker {
  readonly #engine: Engine;
  readonly #name: string;
  readonly #comparison: RowComparison;
  /** From the rows of one design to those of the other; undefined where they are the same. */
  readonly #inputs: RowMapper | undefined;
  readonly #outputs: RowMapper | undefined;
  readonly #stride: number;
  #response = new Uint32Array(0);

  constructor({ layout }: Design, engine: Engine, match: PortMatch, name: string) {
    const { inputs, outputs, threeValued } = engine.layout;
    this.#engine = engine;
    this.#name = name;
    const columns = match.common.map((port, field) => ({ ...port, field }));
    this.#comparison = new RowComparison(layout, columns, name);
    this.#stride = rowStride(outputs, threeValued);
    if (!areAlike(layout.inputs, inputs)) {
      this.#inputs = new RowMapper(layout.inputs, inputs, match.inputs, threeValued);
    }
    if (!areAlike(layout.outputs, outputs)) {
      this.#outputs = new RowMapper(outputs, layout.outputs, match.outputs, threeValued);
    }
  }

  check(block: RunBlock, most: number): Departure[] {
    const { rows, cycles: count, firstCycle } = block;
    const response = this.#run(block);
    const expected = this.#outputs?.map(response, this.#stride, count) ?? response;
    const range = { firstCycle, count };
    return this.#comparison.compare({ rows, at: 0 }, { rows: expected, at: 0 }, range, most);
  }

  finish(): undefined {
    // The other design goes as far as this one.
  }

  close(): void {
    // Nothing is open.
  }

  #run({ cycles, firstCycle, stimulus, stimulusStride }: RunBlock): Uint32Array {
    const words = cycles * this.#stride;
    if (this.#response.length < words) this.#response = new Uint32Array(words);
    const { inputs, threeValued } = this.#engine.layout;
    const isHeld = stimulusStride === 0;
    const rows = this.#inputs?.map(stimulus, stimulusStride, isHeld ? 1 : cycles) ?? stimulus;
    const ownStride = this.#inputs ? rowStride(inputs, threeValued) : stimulusStride;
    try {
      this.#engine.run(cycles, rows, isHeld ? 0 : ownStride, this.#response);
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      const { completed, place } = error;
      const message = `${error.message} (in ${this.#name})`;
      throw new RunFault(firstCycle + completed, { message, place });
    }
    return this.#response;
  }
}

function areAlike(one: RowLayout, other: RowLayout): boolean {
  const { ports } = other;
  return (
    one.ports.length === ports.length &&
    one.ports.every(({ name, width }, i) => name === ports[i]!.name && width === ports[i]!.width)
  );
}

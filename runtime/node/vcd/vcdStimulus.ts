import { layRow, type ModelLayout, type PortLayout, rowStride } from '../../layout.js';
import { RowGatherer } from '../../rowGatherer.js';
import type { StimulusBlock } from '../../stream.js';
import type { TableBytes } from '../bytes/inputBytes.js';
import { wholeFileError } from '../fileForm.js';
import type { StimulusSource } from '../stimulusSource.js';
import { periodUnits } from './period.js';
import { readVcdHeader, type VcdHeader } from './vcdHeader.js';
import { findPorts, type VcdPart } from './vcdPorts.js';
import { type VcdCycle, VcdSampler } from './vcdSampler.js';
import { VcdState } from './vcdState.js';
import { VcdTokens } from './vcdTokens.js';
import { VcdValues } from './vcdValues.js';

/** A clock whose edges may make the cycles of a recording. */
export interface VcdClock {
  /** The input port. */
  readonly port: Omit<PortLayout, 'offset'>;
  /** Which bit of the port, counted from the right. */
  readonly bit: number;
  /** The level after its active edge. */
  readonly active: 0 | 1;
}

/** How a value change dump is read. */
export interface VcdOptions {
  /** The first of these clocks that is in the file makes the cycles. */
  readonly clocks?: readonly VcdClock[];
  /** Length of a cycle in place of the clock's edges: `10ns`, or `10` in units of the file. */
  readonly period?: string;
  /** The scope to take the ports from, names joined with dots; the best one unless given. */
  readonly scope?: string;
  /** The bytes of the file, whose name is then only printed. */
  readonly bytes?: TableBytes;
}

/**
 * Replays a value change dump (IEEE 1364-2005, clause 18, four states) in constant memory.
 *
 * A row of stimulus is what the inputs are just before an active edge of the base clock, so that
 * what changes together with the edge counts for the next cycle. Without the clock in the file, each
 * time at which anything changes is a cycle, with the values after the change; with a period, cycle
 * k has the values just before time (k + 1) times the period. Ports are found as `findPorts` says.
 * In two-valued runs x and z are 0, of which a note tells. Throws `FileError`, with the place where
 * there is one, and what the file system throws.
 */
export async function vcdStimulus(
  path: string,
  layout: ModelLayout,
  options: VcdOptions = {},
): Promise<StimulusSource> {
  const { clocks = [], scope } = options;
  const tokens = new VcdTokens(path, options.bytes);
  try {
    const { ports } = layRow([...layout.inputs.ports, ...clocks.map(({ port }) => port)]);
    const names = new Set(ports.map(({ name }) => name));
    const header = await readVcdHeader(tokens, (name) => names.has(name));
    const inputs = layout.inputs.ports.length;
    const found = findPorts(ports, inputs, header.variables, scope);
    if (typeof found === 'string') throw wholeFileError(path, found);
    const base = clocks.flatMap((clock, i): BaseClock[] => {
      const part = clockPart(ports[inputs + i]!.offset + clock.bit, found[inputs + i]);
      return part === undefined ? [] : [{ part, active: clock.active }];
    })[0];
    const cycle = cycleOf(path, header, options.period, base);
    const recording = new Recording(tokens, layout, cycle);
    layout.inputs.ports.forEach(({ name }, i) => {
      recording.connect(name, found[i]);
    });
    if (base && cycle.by === 'clock') recording.connectClock(base.part);
    else if (clocks.length > 0 && cycle.by === 'step') recording.missClock(clocks[0]!);
    return recording;
  } catch (error) {
    await tokens.close();
    throw error;
  }
}

interface BaseClock {
  readonly part: VcdPart;
  readonly active: 0 | 1;
}

// The place of the clock in its variable stands in `offset`.
function clockPart(place: number, parts: readonly VcdPart[] | undefined): VcdPart | undefined {
  const part = parts?.find(({ offset, width }) => offset <= place && place < offset + width);
  return part && { id: part.id, width: 1, offset: place - part.offset };
}

function cycleOf(
  path: string,
  { unit }: VcdHeader,
  period: string | undefined,
  base: BaseClock | undefined,
): VcdCycle {
  if (period !== undefined) {
    const units = periodUnits(period, unit);
    if (typeof units === 'string') throw wholeFileError(path, units);
    return { by: 'period', units };
  }
  return base ? { by: 'clock', active: base.active } : { by: 'step' };
}

/** A value change dump that is replayed. */
class Recording implements StimulusSource {
  readonly #tokens: VcdTokens;
  readonly #state: VcdState;
  readonly #sampler: VcdSampler;
  readonly #gatherer: RowGatherer;
  readonly #values: VcdValues;
  readonly #missing: string[] = [];
  #clockNote: string | undefined;

  constructor(tokens: VcdTokens, layout: ModelLayout, cycle: VcdCycle) {
    this.#tokens = tokens;
    this.#state = new VcdState(layout.inputs.words);
    this.#gatherer = new RowGatherer(rowStride(layout.inputs, layout.threeValued));
    this.#sampler = new VcdSampler(layout, this.#state, cycle, this.#gatherer);
    this.#values = new VcdValues(tokens, this.#state, this.#sampler);
  }

  connect(port: string, parts: readonly VcdPart[] | undefined): void {
    if (parts === undefined) this.#missing.push(port);
    for (const part of parts ?? []) this.#state.connect(part, false);
  }

  connectClock(part: VcdPart): void {
    this.#state.connect(part, true);
  }

  missClock({ port, bit }: VcdClock): void {
    const name = port.isVector ? `bit ${bit} of ${port.name}` : port.name;
    this.#clockNote =
      `${this.#tokens.path} has no clock ${name}: each time at which anything changes is a cycle; ` +
      'give --stimulus-period where cycles are of one length';
  }

  async *blocks(): AsyncGenerator<StimulusBlock, void, undefined> {
    try {
      do {
        while (this.#values.advance()) yield* this.#gatherer.take();
        yield* this.#gatherer.take();
      } while (await this.#tokens.more());
      while (this.#values.advance()) yield* this.#gatherer.take();
      this.#values.end();
      yield* this.#gatherer.take();
    } finally {
      await this.#tokens.close();
    }
  }

  notes(): readonly string[] {
    const missing = this.#missing.join(', ');
    const held = `${this.#tokens.path} has no variable for ${missing}, held at 0`;
    return [
      ...(missing === '' ? [] : [held]),
      ...(this.#clockNote === undefined ? [] : [this.#clockNote]),
      ...this.#values.notes(),
      ...this.#sampler.notes(),
    ];
  }
}

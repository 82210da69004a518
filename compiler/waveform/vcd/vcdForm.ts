import { readBits } from '../../../runtime/rowBits.js';
import { ByteText } from '../byteText.js';
import { ClockLevels } from '../clockLevels.js';
import type { WaveForm, WaveRequest, WaveRows, WaveSink } from '../wave.js';
import { type Waves, wavesOf } from '../waves.js';
import { declarations, waveCode } from './header.js';

const ZERO = 0x30;
const LETTER_X = 0x78;
const LETTER_B = 0x62;
const SPACE = 0x20;
const LF = 0x0a;

/** Most bytes of a wave's code and the line around it. */
const LONGEST_LINE_REST = 16;

/**
 * Waves as a value change dump with four states (IEEE 1364-2005, clause 18).
 *
 * Vectors are variables of their width; names of the same net share a code. Values stand at the
 * time when outputs are sampled, between two edges of the clocks; see `ClockLevels` for the time
 * axis. Clocks, and copies of them through buffers, move at their edges; a gated clock is shown at
 * the level at which it is sampled.
 */
export const vcdForm: WaveForm = (request) => new VcdSink(request);

class VcdSink implements WaveSink {
  readonly #request: WaveRequest;
  readonly #waves: Waves;
  readonly #clocks: ClockLevels;
  /** For each clock the lines that show it at 0 and at 1. */
  readonly #clockLines: readonly (readonly [string, string])[];
  readonly #text = new ByteText();
  readonly #codes: Uint8Array[] = [];
  /** Values of the row before, and which of them are x. */
  readonly #value: Uint32Array;
  readonly #unknown: Uint32Array;
  #time = -1;
  #next = -1;

  constructor(request: WaveRequest) {
    const { design, list } = request;
    this.#request = request;
    this.#waves = wavesOf(design, list);
    this.#clocks = new ClockLevels(design.clocks, design.schedule);
    this.#clockLines = design.clocks.ports.map((_, clock) => clockLines(this.#waves, clock));
    const words = (list.nets.length + 31) >>> 5;
    this.#value = new Uint32Array(words);
    this.#unknown = new Uint32Array(words);
  }

  *start(): Generator<Uint8Array, void, undefined> {
    const { design, list } = this.#request;
    this.#text.text(`$comment ${COMMENT} $end\n$timescale 1 ns $end\n`);
    yield* declarations(design.circuit, list, this.#waves, this.#text);
  }

  *rows(rows: WaveRows): Generator<Uint8Array, void, undefined> {
    for (let row = 0; row < rows.cycles; row++) {
      const cycle = rows.firstCycle + row;
      if (this.#next < 0) yield* this.#first(cycle, rows, row);
      else yield* this.#changes(cycle, rows, row);
      this.#next = cycle + 1;
      if (this.#text.isPiece) yield this.#text.take();
    }
  }

  *end(): Generator<Uint8Array, void, undefined> {
    this.#moveClocks(this.#next - 1);
    this.#at(this.#clocks.sampleTime(this.#next));
    yield this.#text.take();
  }

  *#first(cycle: number, rows: WaveRows, row: number): Generator<Uint8Array, void, undefined> {
    this.#at(this.#clocks.sampleTime(cycle));
    this.#text.text('$dumpvars\n');
    this.#compare(rows, row);
    for (let wave = 0; wave < this.#waves.count; wave++) {
      if (this.#waves.clock[wave]! < 0) this.#put(wave);
      if (this.#text.isPiece) yield this.#text.take();
    }
    this.#clockLines.forEach((lines, clock) => {
      this.#text.text(lines[this.#clocks.levelAt(cycle, clock)]!);
    });
    this.#text.text('$end\n');
  }

  *#changes(cycle: number, rows: WaveRows, row: number): Generator<Uint8Array, void, undefined> {
    this.#moveClocks(cycle - 1);
    const changed = this.#compare(rows, row);
    if (changed.length === 0) return;
    this.#at(this.#clocks.sampleTime(cycle));
    for (const wave of changed) {
      this.#put(wave);
      if (this.#text.isPiece) yield this.#text.take();
    }
  }

  /** Takes over a row; returns the waves that it changes. */
  #compare({ rows, place }: WaveRows, row: number): number[] {
    const { ofNet, clock } = this.#waves;
    const changed: number[] = [];
    let last = -1;
    const at = row * place.stride + place.firstWord;
    for (let word = 0; word < this.#value.length; word++) {
      const value = rows[at + word]!;
      const unknown = place.toUnknown === undefined ? 0 : rows[at + place.toUnknown + word]!;
      let bits = (value ^ this.#value[word]!) | (unknown ^ this.#unknown[word]!);
      this.#value[word] = value;
      this.#unknown[word] = unknown;
      for (; bits !== 0; bits &= bits - 1) {
        const bit = 32 * word + 31 - Math.clz32(bits & -bits);
        // What pads the last word is no wave's.
        if (bit >= ofNet.length) break;
        const wave = ofNet[bit]!;
        if (wave === last || clock[wave]! >= 0) continue;
        last = wave;
        changed.push(wave);
      }
    }
    return changed;
  }

  #moveClocks(cycle: number): void {
    for (const { time, clock, level } of this.#clocks.moves(cycle)) {
      const line = this.#clockLines[clock]![level]!;
      if (line === '') continue;
      this.#at(time);
      this.#text.text(line);
    }
  }

  #at(time: number): void {
    if (time === this.#time) return;
    this.#text.text(`#${time}\n`);
    this.#time = time;
  }

  #put(wave: number): void {
    const width = this.#waves.width[wave]!;
    const code = this.#code(wave);
    const first = this.#waves.place[wave]!;
    this.#text.with(width + LONGEST_LINE_REST, (bytes, at) => {
      let end =
        width === 1 ? this.#bits(bytes, at, first, 1) : this.#vector(bytes, at, first, width);
      bytes.set(code, end);
      end += code.length;
      bytes[end++] = LF;
      return end;
    });
  }

  // Leading digits that follow from the next one are left out (18.2.1, left extension).
  #vector(bytes: Uint8Array, at: number, first: number, width: number): number {
    bytes[at] = LETTER_B;
    const top = this.#digit(first + width - 1);
    let digits = width;
    while (digits > 1) {
      const next = this.#digit(first + digits - 2);
      const follows = top === ZERO ? next !== LETTER_X : top === next && top === LETTER_X;
      if (this.#digit(first + digits - 1) !== top || !follows) break;
      digits--;
    }
    const end = this.#bits(bytes, at + 1, first, digits);
    bytes[end] = SPACE;
    return end + 1;
  }

  #bits(bytes: Uint8Array, at: number, first: number, count: number): number {
    let end = at;
    for (let bit = first + count - 1; bit >= first; bit--) bytes[end++] = this.#digit(bit);
    return end;
  }

  #digit(bit: number): number {
    if (readBits(this.#unknown, 0, bit, 1) === 1) return LETTER_X;
    return ZERO + readBits(this.#value, 0, bit, 1);
  }

  #code(wave: number): Uint8Array {
    this.#codes[wave] ??= new TextEncoder().encode(waveCode(wave));
    return this.#codes[wave];
  }
}

function clockLines({ clock }: Waves, wanted: number): [string, string] {
  const lines: [string, string] = ['', ''];
  clock.forEach((which, wave) => {
    if (which < 0 || which >> 1 !== wanted) return;
    for (const level of [0, 1]) lines[level]! += `${level ^ (which & 1)}${waveCode(wave)}\n`;
  });
  return lines;
}

const COMMENT =
  'Zero-delay, cycle-accurate values as they are when outputs are sampled. ' +
  'A unit of time is no time in a circuit: it orders the events.';

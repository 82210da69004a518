import type { VcdSampler } from './vcdSampler.js';
import type { VcdState } from './vcdState.js';
import type { VcdTokens } from './vcdTokens.js';

const ZERO = 0x30;
const NINE = 0x39;
const HASH = 0x23;
const DOLLAR = 0x24;

// First characters of value changes; letters as small ones.
const SCALAR = new Uint8Array(256);
for (const digit of '01xXzZ') SCALAR[digit.charCodeAt(0)] = 1;
const VECTOR = 0x62;
const REAL = 0x72;
const TEXT = 0x73;

/** Reads the value changes of a dump (IEEE 1364-2005, 18.2.2) into a state, and samples it. */
export class VcdValues {
  readonly #tokens: VcdTokens;
  readonly #state: VcdState;
  readonly #sampler: VcdSampler;
  #isInComment = false;
  #pauses = 0;
  #firstPause = 0;

  constructor(tokens: VcdTokens, state: VcdState, sampler: VcdSampler) {
    this.#tokens = tokens;
    this.#state = state;
    this.#sampler = sampler;
  }

  /** Reads on; false where the words that are there are used up, true where rows must be taken. */
  advance(): boolean {
    const tokens = this.#tokens;
    while (tokens.next()) {
      const { bytes, start } = tokens;
      const first = bytes[start]!;
      if (this.#isInComment) this.#isInComment = tokens.text() !== '$end';
      else if (SCALAR[first] === 1) this.#scalar();
      else if (first === HASH) {
        if (this.#sampler.goTo(this.#readTime())) return true;
      } else if (first === DOLLAR) this.#keyword();
      else if (!this.#valueAndCode(first | 0x20)) return false;
    }
    return false;
  }

  /** Ends the last step of time. Throws `TableError` where the dump ends inside a value change. */
  end(): void {
    if (this.#tokens.next()) throw this.#tokens.error('the code of a variable is missing');
    this.#sampler.end();
  }

  /** What is to be said of the dump. */
  notes(): string[] {
    if (this.#pauses === 0) return [];
    const often = this.#pauses === 1 ? 'once' : `${this.#pauses} times`;
    return [
      `the recording pauses ${often}, first at time ${this.#firstPause}; its cycles are missing`,
    ];
  }

  // 1! with nothing between
  #scalar(): void {
    const { bytes, start, end } = this.#tokens;
    if (end === start + 1) throw this.#tokens.error('the code of a variable is missing');
    this.#sampler.change();
    const variable = this.#state.find(bytes, start + 1, end);
    if (variable >= 0) this.#state.set(variable, bytes, start, start + 1);
  }

  // b0101 !, r1.5 !; false where the code is not there yet
  #valueAndCode(kind: number): boolean {
    const tokens = this.#tokens;
    const { start, end } = tokens;
    if (kind !== VECTOR && kind !== REAL && kind !== TEXT) {
      throw tokens.error(`no value change: ${tokens.text()}`);
    }
    if (!tokens.next()) {
      tokens.backTo(start);
      return false;
    }
    this.#sampler.change();
    const variable = this.#state.find(tokens.bytes, tokens.start, tokens.end);
    if (variable < 0) return true;
    const isRead = kind === VECTOR && this.#state.set(variable, tokens.bytes, start + 1, end);
    if (isRead && end > start + 1) return true;
    tokens.backTo(start);
    tokens.next();
    throw tokens.error(`${tokens.text()} is no value for a port; it has digits 0, 1, x and z`);
  }

  #readTime(): number {
    const { bytes, start, end } = this.#tokens;
    let time = end > start + 1 ? 0 : Number.NaN;
    for (let at = start + 1; at < end; at++) {
      const digit = bytes[at]!;
      time = digit >= ZERO && digit <= NINE ? time * 10 + (digit - ZERO) : Number.NaN;
    }
    if (!Number.isSafeInteger(time)) throw this.#tokens.error('a time is a number from 0 on');
    const last = this.#sampler.time ?? 0;
    if (time < last) throw this.#tokens.error(`time ${time} comes after time ${last}`);
    return time;
  }

  #keyword(): void {
    switch (this.#tokens.text()) {
      case '$comment':
        this.#isInComment = true;
        return;
      case '$dumpoff':
        if (this.#pauses++ === 0) this.#firstPause = this.#sampler.time ?? 0;
        this.#sampler.pause();
        return;
      case '$end':
      case '$dumpvars':
      case '$dumpall':
      case '$dumpon':
        return;
      default:
        throw this.#tokens.error(`${this.#tokens.text()} cannot stand among value changes`);
    }
  }
}

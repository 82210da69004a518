import { netId } from '../../../circuit/ids.js';
import type { Source } from '../../../diagnostics/source.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { Elaboration, MemoryBinding } from '../scope.js';
import type { Expression, Statement } from '../syntax.js';
import { blockingAt } from './assign.js';
import type { Context } from './context.js';
import { type DataWord, dataWords } from './dataWords.js';
import { wordCount, wordWidth } from './memorySelect.js';
import { bindingOf, refuse } from './names.js';
import { isPowerUp } from './powerUp.js';
import { pathText, report } from './report.js';
import { constantIn, integerOf } from './widths.js';

type TaskCall = Extract<Statement, { kind: 'callTask' }>;

/**
 * Carries out `$readmemh` and `$readmemb` (IEEE 1364-2005, 17.2.9) on what a memory holds at
 * power-up; `radix` is 16 or 2. What is wrong with a data file is told at its place in that file.
 */
export function readMemoryFile(statement: TaskCall, radix: 16 | 2, context: Context): void {
  const { shared } = context.scope;
  const task = pathText(shared, statement.path);
  const [file, target, ...addresses] = statement.arguments;
  if (file === undefined || target === undefined || addresses.length > 2) {
    const count = statement.arguments.length;
    const message = `\`${task}\` takes a file, a memory and up to 2 addresses, got ${count}`;
    report(shared, 'argument-count', statement, message);
    return;
  }
  if (!isPowerUp(context)) {
    const message = `\`${task}\` fills a memory at power-up; call it in an initial block`;
    refuse(context, statement, message);
    return;
  }
  const memory = memoryNamed(target, task, context);
  const range = memory && rangeOf(memory, addresses, context);
  const path = textOf(file, context);
  if (memory === undefined || range === undefined || path === undefined) return;
  const source = shared.readData?.(path, statement.start);
  if (source === undefined) {
    const message =
      `there is no file ${path} beside this source or in a folder given by --include; ` +
      'mend its name';
    report(shared, 'file-unreadable', file, message);
    return;
  }
  new Loading(memory, range, context, statement.start, source).load(radix);
}

function memoryNamed(
  target: Expression,
  task: string,
  context: Context,
): MemoryBinding | undefined {
  const { shared } = context.scope;
  const binding = target.kind === 'name' ? bindingOf(target, context) : undefined;
  if (target.kind === 'name' && binding === undefined) return undefined;
  if (binding?.kind !== 'memory' || !binding.isVariable) {
    const message = `\`${task}\` fills a memory, such as reg [7:0] m [0:255]; give its name`;
    report(shared, 'target-invalid', target, message);
    return undefined;
  }
  if (binding.indices.length === 1) return binding;
  refuse(
    context,
    target,
    `\`${task}\` fills memories with one index; give this one a single index`,
  );
  return undefined;
}

/** Where loading starts and where it ends; `hasEnd` tells whether the end was asked for. */
interface AddressRange {
  readonly start: number;
  readonly finish: number;
  readonly hasEnd: boolean;
}

function rangeOf(
  { indices }: MemoryBinding,
  addresses: readonly Expression[],
  context: Context,
): AddressRange | undefined {
  const { low, high } = indices[0]!;
  const numbers = addresses.map((address) => {
    const number = integerOf(address, context);
    if (number === undefined || (number >= low && number <= high)) return number;
    const message = `address ${number} is outside of the memory, which has ${low} to ${high}`;
    report(context.scope.shared, 'range-invalid', address, message);
    return undefined;
  });
  if (numbers.includes(undefined)) return undefined;
  const [start = low, finish = high] = numbers as number[];
  return { start, finish, hasEnd: numbers.length === 2 };
}

/** A file name: a string, or a parameter that holds one. */
function textOf(expression: Expression, context: Context): string | undefined {
  if (expression.kind === 'string') return expression.text;
  const constant = constantIn(expression, context);
  if (constant === undefined) return undefined;
  const bytes: number[] = [];
  for (let rest = constant.value; rest > 0n; rest >>= 8n) bytes.push(Number(rest & 0xffn));
  return new TextDecoder().decode(Uint8Array.from(bytes.reverse()));
}

const bases = new WeakMap<Elaboration['sources'], Map<Source, Position>>();

/** Position of the first byte of a data file in the map of all sources, to which it is added. */
function baseOf({ sources }: Elaboration, source: Source): Position {
  const known = bases.get(sources) ?? new Map<Source, Position>();
  bases.set(sources, known);
  const base = known.get(source) ?? sources.add(source);
  known.set(source, base);
  return base;
}

/** A memory that is being filled from a file. */
class Loading {
  readonly #memory: MemoryBinding;
  readonly #range: AddressRange;
  readonly #context: Context;
  readonly #start: Position;
  readonly #source: Source;
  readonly #base: Position;

  constructor(
    memory: MemoryBinding,
    range: AddressRange,
    context: Context,
    start: Position,
    source: Source,
  ) {
    this.#memory = memory;
    this.#range = range;
    this.#context = context;
    this.#start = start;
    this.#source = source;
    this.#base = baseOf(context.scope.shared, source);
  }

  load(radix: 16 | 2): void {
    const { start, finish } = this.#range;
    const step = start <= finish ? 1 : -1;
    let address = start;
    let words = 0;
    let hasAddresses = false;
    for (const word of dataWords(this.#source.bytes, radix)) {
      if (word.kind === 'problem') {
        this.#report('syntax-error', word, word.message);
        return;
      }
      if (word.kind === 'address') {
        hasAddresses = true;
        address = word.address;
        if (this.#isInside(address)) continue;
        this.#report('range-invalid', word, this.#outside(address));
        return;
      }
      if (!this.#isInside(address)) {
        this.#report('memory-data', word, `${this.#tooMany()}; the rest is left out`);
        return;
      }
      this.#write(address, word);
      address += step;
      words++;
    }
    const expected = Math.abs(finish - start) + 1;
    if (hasAddresses || words === expected) return;
    const at = { start: this.#source.bytes.length, end: this.#source.bytes.length };
    const message = `there are ${words} words here for ${expected} in the memory; the others keep what they have`;
    this.#report('memory-data', at, message);
  }

  #isInside(address: number): boolean {
    const { start, finish } = this.#range;
    return address >= Math.min(start, finish) && address <= Math.max(start, finish);
  }

  #outside(address: number): string {
    const { start, finish } = this.#range;
    const [low, high] = [Math.min(start, finish), Math.max(start, finish)];
    const hex = (value: number): string => value.toString(16);
    return `address ${hex(address)} is outside of what is filled, ${hex(low)} to ${hex(high)}`;
  }

  #tooMany(): string {
    const { start, finish } = this.#range;
    return `there are more words than the ${Math.abs(finish - start) + 1} to be filled`;
  }

  #write(address: number, word: Extract<DataWord, { kind: 'word' }>): void {
    const memory = this.#memory;
    const { store, logic } = this.#context;
    const width = wordWidth(memory);
    const index = address - memory.indices[0]!.low;
    if (index < 0 || index >= wordCount(memory)) return;
    const mode = blockingAt(this.#start);
    for (let bit = 0; bit < width; bit++) {
      const value = word.bit(bit);
      if (memory.held !== undefined) memory.held.contents.setBit(index, bit, value);
      else store.write(netId(memory.words[index]![bit]!), logic.constant(value), logic.one, mode);
    }
    if (!word.exceeds(width)) return;
    this.#report('memory-data', word, `this number does not fit in ${width} bits, and is cut`);
  }

  #report(
    code: 'syntax-error' | 'range-invalid' | 'memory-data',
    { start, end }: { readonly start: number; readonly end: number },
    message: string,
  ): void {
    const place = { start: this.#base + start, end: this.#base + end };
    report(this.#context.scope.shared, code, place, message);
  }
}

import { CircuitBuilder } from '../../circuit/builder.js';
import type { Circuit } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { type NetId, NO_NET } from '../../circuit/ids.js';
import type { DiagnosticCode } from '../../diagnostics/codes.js';
import type { Diagnostics } from '../../diagnostics/diagnostics.js';
import type { Source, Span } from '../../diagnostics/source.js';
import { type NameId, NameTable } from '../names.js';
import { BenchNets } from './benchNets.js';
import { type GateWord, gateWords } from './gateWords.js';
import { BenchScanner, Token } from './scanner.js';

/**
 * Reads a netlist in the ISCAS'89 text form: `INPUT(a)`, `OUTPUT(y)`, `y = NAND(a, b)`.
 *
 * Gate words may be in any case, names may be used before they are defined. The form has no clock:
 * where there are flip-flops, an input port `clock` (or `clock_1`, … if that name is taken) comes
 * first and clocks them all on its rising edge. They have no power-up value. Returns undefined if
 * anything is wrong with the text, having reported all of it.
 *
 * Source of the form: F. Brglez, D. Bryan, K. Kozminski, "Combinational profiles of sequential
 * benchmark circuits", ISCAS 1989.
 */
export function readBench(source: Source, diagnostics: Diagnostics): Circuit | undefined {
  return new BenchReader(source, diagnostics).read();
}

/** Undefined names beyond this many are only counted. */
const MAX_UNDEFINED = 50;

class BenchReader {
  readonly #source: Source;
  readonly #diagnostics: Diagnostics;
  readonly #scanner: BenchScanner;
  readonly #builder = new CircuitBuilder();
  readonly #nets: BenchNets;
  readonly #words = new NameTable();
  // Per id of `#words`, so that each spelling of a gate word is looked up as text but once.
  readonly #gateOfWord: (GateWord | undefined)[] = [];
  readonly #inputs: { readonly name: NameId; readonly offset: number }[] = [];
  readonly #outputs = new Map<NameId, number>();
  #clock: NetId = NO_NET;
  #failed = false;

  constructor(source: Source, diagnostics: Diagnostics) {
    this.#source = source;
    this.#diagnostics = diagnostics;
    this.#scanner = new BenchScanner(source.bytes);
    this.#builder.addSource(source);
    this.#nets = new BenchNets(source, this.#builder);
  }

  read(): Circuit | undefined {
    if (this.#scanner.token === Token.End) {
      this.#syntaxError('the file is empty; INPUT, OUTPUT or the name of a net was expected');
    }
    while (this.#scanner.token !== Token.End) this.#statement();
    this.#nets.defineSupplies();
    this.#reportUndefined();
    return this.#failed ? undefined : this.#finish();
  }

  // statement = ('INPUT' | 'OUTPUT') '(' name ')' | name '=' gate
  #statement(): void {
    const { start, end, token } = this.#scanner;
    this.#scanner.next();
    if (token !== Token.Word) {
      this.#syntaxError('a statement begins with INPUT, OUTPUT or the name of a net', start, end);
      return;
    }
    if (this.#at(Token.Equals)) this.#definition(start, end);
    else this.#port(this.#source.slice(start, end));
  }

  #port(word: string): void {
    const direction = word.toUpperCase();
    if (direction !== 'INPUT' && direction !== 'OUTPUT') {
      this.#syntaxError(`expected = after ${word}; only INPUT and OUTPUT stand without it`);
      return;
    }
    if (!this.#pass(Token.Open, '(')) return;
    const { start, end } = this.#scanner;
    if (!this.#pass(Token.Word, 'the name of a port')) return;
    if (!this.#pass(Token.Close, ')')) return;
    const name = this.#nets.at(start, end);
    if (direction === 'INPUT') this.#input(name, start);
    else this.#output(name, start);
  }

  #input(name: NameId, offset: number): void {
    if (this.#define(name, offset)) this.#inputs.push({ name, offset });
  }

  #output(name: NameId, offset: number): void {
    const first = this.#outputs.get(name);
    if (first === undefined) {
      this.#outputs.set(name, offset);
      return;
    }
    const message = `${this.#nets.text(name)} is an output already; remove one of the two`;
    const firstSpan = this.#nets.spanAt(name, first);
    this.#error('name-redeclared', message, this.#nets.spanAt(name, offset), firstSpan);
  }

  // gate = word | word '(' [ name { ',' name } ] ')'
  #definition(start: number, end: number): void {
    this.#scanner.next();
    const { start: wordStart, end: wordEnd } = this.#scanner;
    if (!this.#pass(Token.Word, 'the kind of a gate')) return;
    // Defined even if the gate is wrong: one fault, one message.
    const name = this.#nets.at(start, end);
    const isNew = this.#define(name, start);
    const word = this.#gateWord(wordStart, wordEnd);
    if (word === undefined) {
      const known = [...gateWords.keys()].join(', ');
      const text = this.#source.slice(wordStart, wordEnd);
      this.#syntaxError(`unknown kind of gate ${text}; known are ${known}`, wordStart, wordEnd);
      return;
    }
    const inputs = this.#gateInputs();
    if (inputs === undefined) return;
    if (inputs.length < word.minInputs || inputs.length > word.maxInputs) {
      this.#arityError(word, inputs.length, wordStart, wordEnd);
      return;
    }
    if (isNew) this.#drive(this.#nets.net(name), word.kind, inputs, start);
  }

  #gateInputs(): NetId[] | undefined {
    const inputs: NetId[] = [];
    if (!this.#at(Token.Open)) return inputs;
    this.#scanner.next();
    if (this.#at(Token.Close)) {
      this.#scanner.next();
      return inputs;
    }
    for (;;) {
      const { start, end } = this.#scanner;
      if (!this.#pass(Token.Word, 'the name of a net')) return undefined;
      inputs.push(this.#nets.net(this.#nets.at(start, end)));
      if (this.#at(Token.Close)) break;
      if (!this.#pass(Token.Comma, ', or )')) return undefined;
    }
    this.#scanner.next();
    return inputs;
  }

  #drive(output: NetId, kind: GateKind, inputs: readonly NetId[], offset: number): void {
    this.#builder.at(0, offset);
    if (kind !== GateKind.Register) {
      this.#builder.drive(output, kind, inputs);
      return;
    }
    if (this.#clock === NO_NET) this.#clock = this.#builder.net();
    this.#builder.register({ output, clock: this.#clock, data: inputs[0]! });
  }

  #finish(): Circuit {
    const builder = this.#builder;
    if (this.#clock !== NO_NET) {
      builder.at(0, 0);
      builder.input(this.#nets.addUnnamed('clock', this.#clock), [this.#clock]);
    }
    for (const { name, offset } of this.#inputs) {
      builder.at(0, offset);
      builder.input(this.#nets.text(name), [this.#nets.net(name)]);
    }
    for (const name of this.#outputs.keys()) {
      builder.output(this.#nets.text(name), [this.#nets.net(name)]);
    }
    const name = this.#source.path.replace(/^.*[/\\]/, '').replace(/\.bench(\.gz)?$/i, '');
    this.#nets.publish(name);
    return builder.finish(name);
  }

  #gateWord(start: number, end: number): GateWord | undefined {
    const id = this.#words.intern(this.#source.bytes, start, end);
    if (id >= this.#gateOfWord.length) {
      this.#gateOfWord[id] = gateWords.get(this.#words.text(id).toUpperCase());
    }
    return this.#gateOfWord[id];
  }

  #at(token: number): boolean {
    return this.#scanner.token === token;
  }

  #pass(token: number, expected: string): boolean {
    if (this.#at(token)) {
      this.#scanner.next();
      return true;
    }
    this.#syntaxError(`expected ${expected}`);
    return false;
  }

  #define(name: NameId, offset: number): boolean {
    if (this.#nets.define(name, offset)) return true;
    const message = `${this.#nets.text(name)} is defined already; remove or rename one of the two`;
    const first = this.#nets.definitionOf(name);
    this.#error('name-redeclared', message, this.#nets.spanAt(name, offset), first);
    return false;
  }

  #reportUndefined(): void {
    const missing = this.#nets.undefinedNames();
    for (const { name, span } of missing.slice(0, MAX_UNDEFINED)) {
      const message = `${this.#nets.text(name)} is used but neither an input nor defined by a gate`;
      this.#error('name-undeclared', message, span);
    }
    const rest = missing.length - MAX_UNDEFINED;
    if (rest > 0) this.#error('name-undeclared', `${rest} more names are used but not defined`);
  }

  #arityError(word: GateWord, got: number, start: number, end: number): void {
    const { minInputs, maxInputs } = word;
    const wanted = minInputs === maxInputs ? `${minInputs}` : `at least ${minInputs}`;
    const text = `${this.#source.slice(start, end)} takes ${wanted} input(s), got ${got}`;
    this.#error('gate-arity', text, { source: this.#source, start, end });
  }

  // Reading goes on with the line after the last token that was understood.
  #syntaxError(message: string, start = this.#scanner.start, end = this.#scanner.end): void {
    // What is missing at the end of the text belongs behind its last word.
    const isEnd = start === this.#source.bytes.length;
    const from = isEnd ? this.#scanner.previousEnd : start;
    const text = isEnd ? `${message}, found the end of the file` : message;
    this.#error('syntax-error', text, {
      source: this.#source,
      start: from,
      end: isEnd ? from : end,
    });
    this.#scanner.skipLine(this.#scanner.previousEnd);
  }

  #error(code: DiagnosticCode, message: string, span?: Span, first?: Span): void {
    this.#failed = true;
    const related = first && [{ message: 'the first is here', span: first }];
    this.#diagnostics.add(code, message, span, related);
  }
}

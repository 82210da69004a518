import type { DiagnosticCode } from '../../diagnostics/codes.js';
import type { Source } from '../../diagnostics/source.js';
import type { Position, SourceMap } from '../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../names.js';
import { faultOfText } from '../textForm.js';
import { Char, CharClass, charClass, isSpace } from './characters.js';
import { Conditionals, type Place } from './conditionals.js';
import { readBetween, readLine, readWord, skipContinued, skipDefault } from './directiveText.js';
import { laterSyntax } from './laterStandard.js';
import { type Macro, macroActuals, macroBody, substitute } from './macros.js';
import type { Problems } from './problems.js';
import { Scanner } from './scan.js';
import type { ScannerClient } from './scannerClient.js';
import { initialSettings, type Settings, settingDirectives } from './settings.js';
import { endOfName } from './textEnds.js';

/** What the text of a reading depends on besides itself. */
export interface PreprocessOptions {
  /** Macros defined from the start: name to text. */
  readonly defines?: ReadonlyMap<string, string>;
  /** Finds the file that an `include` in another file names; undefined if there is none. */
  readonly readInclude?: (path: string, from: Source) => Source | undefined;
}

// Limits against texts without end, such as a macro that uses itself. Each use inside of a macro
// counts as its bytes and some for its own cost.
const MAX_MACRO_DEPTH = 200;
const MAX_INCLUDE_DEPTH = 50;
const MAX_INCLUDES = 20_000;
const MAX_EXPANSION = 1 << 24;
const USE_COST = 64;

// What macros and files that are included again may add to a text in all: bytes, and bytes for each
// byte of the text.
const MAX_ADDED = 1 << 26;
const ADDED_PER_BYTE = 16;

/** A text that waits for the end of one inside it. */
interface Frame {
  readonly text: Uint8Array;
  readonly at: number;
  readonly base: Position;
  readonly fixedStart: Position;
  readonly fixedEnd: Position;
  readonly conditionals: Conditionals;
  readonly source: Source;
}

/**
 * Carries out the directives (IEEE 1364-2005, clause 19) while the scanner goes over the text.
 *
 * Macros and settings last over all sources of a reading, as the standard has it.
 */
export class Preprocessor implements ScannerClient {
  readonly tokens: Scanner;
  readonly settings: Settings = initialSettings();
  /** Where a macro was used last that has no text: what follows it may lack that. */
  undefinedAt: Position = -1;

  readonly #names: NameTable;
  readonly #sourceMap: SourceMap;
  readonly #problems: Problems;
  readonly #readInclude: PreprocessOptions['readInclude'];
  readonly #macros = new Map<NameId, Macro>();
  readonly #bases = new Map<Source, Position>();
  readonly #frames: Frame[] = [];
  readonly #directives: ReadonlyMap<string, (place: Place) => void>;
  #conditionals: Conditionals;
  #source: Source | undefined;
  #includeDepth = 0;
  #includes = 0;
  #expanded = 0;
  #added = 0;

  constructor(
    names: NameTable,
    sourceMap: SourceMap,
    problems: Problems,
    options: PreprocessOptions,
  ) {
    this.#names = names;
    this.#sourceMap = sourceMap;
    this.#problems = problems;
    this.#readInclude = options.readInclude;
    this.tokens = new Scanner(names, this);
    this.#conditionals = this.#newConditionals();
    for (const [name, text] of options.defines ?? []) {
      const body = new TextEncoder().encode(text);
      this.#macros.set(names.internText(name), { formals: undefined, body });
    }
    this.#directives = this.#directiveTable();
  }

  /** Begins a source; the scanner's next token is its first. */
  open(source: Source): void {
    this.#frames.length = 0;
    this.#includeDepth = 0;
    this.#enter(source);
  }

  endOfText(): boolean {
    this.#conditionals.finish();
    const frame = this.#frames.pop();
    if (frame === undefined) return false;
    const { tokens } = this;
    if (tokens.fixedStart < 0) this.#includeDepth--;
    tokens.text = frame.text;
    tokens.at = frame.at;
    tokens.base = frame.base;
    tokens.fixedStart = frame.fixedStart;
    tokens.fixedEnd = frame.fixedEnd;
    this.#conditionals = frame.conditionals;
    this.#source = frame.source;
    return true;
  }

  directive(): void {
    const { tokens } = this;
    const start = tokens.at;
    const end = endOfName(tokens.text, start + 1);
    tokens.at = end;
    const place = { start: tokens.position(start), end: tokens.endPosition(end) };
    if (tokens.text[start + 1] === Char.Backtick) {
      tokens.at = endOfName(tokens.text, start + 2);
      const message =
        "'``' joins words in macros of SystemVerilog, but IEEE 1364-2005 Verilog is read here; " +
        'give the macro the whole word as an argument';
      this.#problem(message, { start: place.start, end: tokens.endPosition(start + 2) });
      return;
    }
    if (charClass[tokens.text[start + 1] ?? 0] !== CharClass.Letter) {
      this.#problem("the name of a directive or macro is missing after '`'", place);
      return;
    }
    const id = this.#names.intern(tokens.text, start + 1, end);
    const name = this.#names.text(id);
    const directive = this.#directives.get(name);
    if (directive !== undefined) directive(place);
    else this.#useMacro(id, place);
  }

  problem(message: string, start: Position, end: Position): void {
    this.#report('syntax-error', message, start, end);
  }

  #report(code: DiagnosticCode, message: string, start: Position, end: Position): void {
    this.#problems.add(code, message, start, end);
    if (this.#problems.areTooMany) this.#giveUp();
  }

  // What cannot be read may go on without end, each piece with a search through all of the rest.
  #giveUp(): void {
    this.#problems.giveUp();
    this.#frames.length = 0;
    this.tokens.text = new Uint8Array(0);
  }

  #problem(message: string, place: Place): void {
    this.problem(message, place.start, place.end);
  }

  #directiveTable(): Map<string, (place: Place) => void> {
    const { tokens, settings } = this;
    const problem = this.#problem.bind(this);
    const table = new Map<string, (place: Place) => void>([
      ['define', (place) => this.#define(place)],
      ['undef', (place) => this.#undefine(place)],
      ['include', (place) => this.#include(place)],
      ['ifdef', (place) => this.#conditionals.begin(tokens, place, true)],
      ['ifndef', (place) => this.#conditionals.begin(tokens, place, false)],
      ['elsif', (place) => this.#conditionals.otherwise(tokens, place, false)],
      ['else', (place) => this.#conditionals.otherwise(tokens, place, true)],
      ['endif', (place) => this.#conditionals.end(place)],
    ]);
    for (const [name, set] of settingDirectives) {
      table.set(name, (place) => set(settings, tokens, place, problem));
    }
    return table;
  }

  #newConditionals(): Conditionals {
    return new Conditionals(
      (macro) => this.#macros.has(this.#names.internText(macro)),
      this.#problem.bind(this),
    );
  }

  /** `define name [ ( formal { , formal } ) ] text`, where the `(` follows the name at once. */
  #define(place: Place): void {
    const { tokens } = this;
    const name = readWord(tokens);
    if (name === '' || this.#directives.has(name)) {
      this.#problem(
        name === '' ? 'the name of the macro is missing' : `'${name}' is the name of a directive`,
        place,
      );
      tokens.at = macroBody(tokens.text, tokens.at).end;
      return;
    }
    const formals = tokens.text[tokens.at] === Char.LeftParen ? this.#formals(place) : undefined;
    while (isSpace(tokens.text[tokens.at]) && tokens.text[tokens.at] !== Char.LineFeed) tokens.at++;
    const { body, end } = macroBody(tokens.text, tokens.at);
    tokens.at = end;
    this.#macros.set(this.#names.internText(name), { formals, body });
  }

  #formals(place: Place): NameId[] {
    const { tokens } = this;
    const formals: NameId[] = [];
    let separator: number;
    do {
      tokens.at++;
      skipContinued(tokens);
      const name = readWord(tokens);
      separator = skipContinued(tokens);
      if (separator === Char.Equals) {
        const message = laterSyntax("a macro's default", 'give the argument wherever it is used');
        this.#problem(message, place);
        separator = skipDefault(tokens);
      }
      if (name === '' || (separator !== Char.Comma && separator !== Char.RightParen)) {
        this.#problem("the arguments of a macro are names between '(' and ')'", place);
        return formals;
      }
      formals.push(this.#names.internText(name));
    } while (separator === Char.Comma);
    tokens.at++;
    return formals;
  }

  #undefine(place: Place): void {
    const name = readWord(this.tokens);
    if (name === '') this.#problem('the name of the macro is missing', place);
    else this.#macros.delete(this.#names.internText(name));
  }

  #useMacro(id: NameId, place: Place): void {
    const { tokens } = this;
    const macro = this.#macros.get(id);
    const name = this.#names.text(id);
    if (macro === undefined) {
      const cure = `define it before, or with --define ${name}=TEXT`;
      const message = `the macro '\`${name}' is not defined; ${cure}`;
      this.#report('name-undeclared', message, place.start, place.end);
      this.undefinedAt = place.start;
      return;
    }
    let text = macro.body;
    if (macro.formals !== undefined) {
      const open = tokens.skipBlank(true) === Char.LeftParen;
      const actuals = open ? macroActuals(tokens.text, tokens.at) : undefined;
      if (actuals === undefined || actuals.texts.length !== macro.formals.length) {
        const count = `${macro.formals.length} argument${macro.formals.length === 1 ? '' : 's'}`;
        this.#problem(`the macro '\`${name}' needs ${count} between '(' and ')'`, place);
        // Without a `)` in the rest of the text there is nothing to go on with.
        if (open) tokens.at = actuals?.end ?? tokens.text.length;
        return;
      }
      tokens.at = actuals.end;
      const substituted = substitute(macro, actuals, this.#names, MAX_EXPANSION);
      if (substituted === undefined) {
        this.#endless(name, place);
        return;
      }
      text = substituted;
    }
    this.#expand(text, name, place);
  }

  #expand(text: Uint8Array, name: string, place: Place): void {
    const { tokens } = this;
    const isInside = tokens.fixedStart >= 0;
    this.#expanded = (isInside ? this.#expanded : 0) + text.length + USE_COST;
    const depth = this.#frames.length - this.#includeDepth;
    if (depth > MAX_MACRO_DEPTH || this.#expanded > MAX_EXPANSION) {
      this.#endless(name, place);
      return;
    }
    if (!this.#mayAdd(text.length + USE_COST)) {
      const message = `macros such as '\`${name}' make the text too long; do they use each other?`;
      this.#problem(message, place);
      this.#giveUp();
      return;
    }
    const end = isInside ? tokens.fixedEnd : tokens.endPosition(tokens.at);
    this.#push();
    tokens.text = text;
    tokens.at = 0;
    tokens.fixedStart = place.start;
    tokens.fixedEnd = end;
  }

  #endless(name: string, place: Place): void {
    this.#problem(`the text of the macro '\`${name}' has no end; does it use itself?`, place);
    while (this.tokens.fixedStart >= 0) this.endOfText();
    this.undefinedAt = place.start;
  }

  /** Takes note of bytes that come on top of those of the files; whether they may. */
  #mayAdd(bytes: number): boolean {
    this.#added += bytes;
    return this.#added <= MAX_ADDED + ADDED_PER_BYTE * this.#sourceMap.length;
  }

  /** `include "path"` or `include <path>`. */
  #include(place: Place): void {
    const { tokens } = this;
    const path =
      readBetween(tokens, Char.Quote, Char.Quote) ?? readBetween(tokens, Char.Less, Char.Greater);
    const whole = { start: place.start, end: tokens.endPosition(tokens.at) };
    if (path === undefined || path === '') {
      this.#problem('\'`include\' needs a file name, such as "cells.v"', place);
      readLine(tokens);
      return;
    }
    if (this.#includeDepth >= MAX_INCLUDE_DEPTH || ++this.#includes > MAX_INCLUDES) {
      const limit =
        this.#includes > MAX_INCLUDES
          ? `more than ${MAX_INCLUDES} files are included`
          : `files are included ${MAX_INCLUDE_DEPTH} deep`;
      const message = `${limit}; does "${path}" include itself?`;
      this.#problem(message, whole);
      if (this.#includes > MAX_INCLUDES) this.#giveUp();
      return;
    }
    const source = this.#readInclude?.(path, this.#source!);
    if (source === undefined) {
      const message = `the included file "${path}" is not found; name its folder with --include`;
      this.#report('file-unreadable', message, whole.start, whole.end);
      return;
    }
    const fault = this.#bases.has(source) ? undefined : faultOfText(source.bytes);
    if (fault !== undefined) {
      this.#report('file-no-text', `the included file "${path}" ${fault}`, whole.start, whole.end);
      return;
    }
    if (this.#bases.has(source) && !this.#mayAdd(source.bytes.length)) {
      this.#problem(`"${path}" is included too often; does it include itself?`, whole);
      this.#giveUp();
      return;
    }
    this.#includeDepth++;
    this.#push();
    this.#enter(source);
  }

  #push(): void {
    const { text, at, base, fixedStart, fixedEnd } = this.tokens;
    const conditionals = this.#conditionals;
    this.#frames.push({
      text,
      at,
      base,
      fixedStart,
      fixedEnd,
      conditionals,
      source: this.#source!,
    });
    this.#conditionals = this.#newConditionals();
  }

  #enter(source: Source): void {
    const { tokens } = this;
    let base = this.#bases.get(source);
    if (base === undefined) {
      base = this.#sourceMap.add(source);
      this.#bases.set(source, base);
    }
    this.#source = source;
    const { bytes } = source;
    tokens.text = bytes;
    // A byte order mark is no part of the text.
    tokens.at = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
    tokens.base = base;
    tokens.fixedStart = -1;
    tokens.fixedEnd = -1;
  }
}

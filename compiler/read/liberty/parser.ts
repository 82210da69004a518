import type { Source } from '../../diagnostics/source.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameTable } from '../names.js';
import type { Problems } from '../verilog/problems.js';
import type { Includes, OpenSource } from './includes.js';
import { OpenGroup } from './openGroup.js';
import { Recovery, shortened } from './recovery.js';
import { cellRule, fileRule, type GroupRule, libraryRule } from './rules.js';
import { Scanner, Token } from './scanner.js';
import type { LibertyGroup, LibertyText } from './syntax.js';

/** Takes the cells of a file as they are read, with the library that each stands in. */
export type CellVisitor = (cell: LibertyGroup, library: LibertyGroup) => void;

/**
 * Reads the statements of a library, keeping what the table of rules names.
 *
 * After a fault reading goes on at the next statement, and where a brace is missing or too many at
 * the next group that cannot stand where it does.
 */
export class LibertyParser {
  readonly #names: NameTable;
  readonly #problems: Problems;
  readonly #includes: Includes;
  readonly #visitCell: CellVisitor;
  // The groups around the present place, the file itself first.
  readonly #stack: OpenGroup[] = [];
  // Index into the stack of the group that the present file began in.
  #floor = 0;
  // Index into the stack of the group that the ones inside it are being left for, or -1.
  #returnTo = -1;
  #scanner!: Scanner;
  #recovery!: Recovery;

  constructor(names: NameTable, problems: Problems, includes: Includes, visitCell: CellVisitor) {
    this.#names = names;
    this.#problems = problems;
    this.#includes = includes;
    this.#visitCell = visitCell;
  }

  /** file ::= { library }; returns the libraries without their cells */
  parseFile(source: Source): readonly LibertyGroup[] {
    const file = new OpenGroup('file', [], fileRule, 0, 0);
    this.#stack.push(file);
    this.#parseSource(this.#includes.open(source), file);
    this.#stack.pop();
    return file.groups;
  }

  /** All statements of a file, in a group that may have begun in another. */
  #parseSource({ source, base }: OpenSource, group: OpenGroup): void {
    const before = { scanner: this.#scanner, recovery: this.#recovery, floor: this.#floor };
    this.#floor = this.#stack.length - 1;
    this.#scanner = new Scanner(source.bytes, base, this.#names);
    this.#recovery = new Recovery(this.#scanner, this.#problems);
    this.#scanner.next();
    this.#statements(group);
    while (this.#scanner.token === Token.CloseGroup && !this.#problems.areTooMany) {
      this.#recovery.fault("no group is open that this '}' could close; remove it");
      this.#scanner.next();
      this.#statements(group);
    }
    this.#recovery.reportOpenEnd();
    this.#includes.close();
    this.#scanner = before.scanner;
    this.#recovery = before.recovery;
    this.#floor = before.floor;
  }

  /** statements ::= { statement }, up to the `}` or the end of the text */
  #statements(group: OpenGroup): void {
    const scanner = this.#scanner;
    const depth = this.#stack.length - 1;
    while (!this.#problems.areTooMany) {
      if (this.#returnTo === depth) this.#returnTo = -1;
      if (this.#returnTo >= 0) return;
      if (scanner.token === Token.End || scanner.token === Token.CloseGroup) return;
      this.#statement(group);
    }
  }

  /** statement ::= NAME `:` value | NAME `(` arguments `)` [ `{` statements `}` ] | `;` */
  #statement(group: OpenGroup): void {
    const scanner = this.#scanner;
    const { token, position } = scanner;
    if (token === Token.Semicolon) {
      scanner.next();
      return;
    }
    if (token !== Token.Word && token !== Token.String) {
      this.#recovery.unexpected('the name of an attribute or group', true);
      return;
    }
    const kind = scanner.text();
    scanner.next();
    if (scanner.token === Token.Colon) this.#simpleAttribute(group, kind, position);
    else if (scanner.token === Token.OpenArguments) this.#withArguments(group, kind, position);
    else this.#recovery.unexpected(`':' or '(' after ${shortened(kind)}`);
  }

  /** The value ends with `;`, or with its line where that is missing. */
  #simpleAttribute(group: OpenGroup, kind: string, start: Position): void {
    const scanner = this.#scanner;
    if (group.rule === fileRule) this.#recovery.outside(kind, 'library', start);
    const isKept = group.rule.attributes.has(kind);
    scanner.next();
    if (isAfterValue(scanner)) {
      this.#recovery.fault(
        `the value of ${shortened(kind)} is missing`,
        start,
        start + kind.length,
      );
    } else if (isKept) {
      const value = this.#value(kind);
      if (value === undefined) return;
      group.set(kind, [value]);
    } else {
      do scanner.next();
      while (!isAfterValue(scanner) && !scanner.isOnNewLine);
    }
    this.#accept(Token.Semicolon);
  }

  /** The tokens up to the end of the attribute; undefined after a report. */
  #value(kind: string): LibertyText | undefined {
    const scanner = this.#scanner;
    // The rows of a table often stand on lines of their own.
    if (kind !== 'table' && scanner.cutString()) {
      this.#recovery.fault('the string is not closed before the end of its line');
    }
    const first = contentOf(scanner);
    const firstStart = scanner.start;
    scanner.next();
    if (isAfterValue(scanner) || scanner.isOnNewLine) return first;
    let { end } = scanner;
    while (!isAfterValue(scanner) && !scanner.isOnNewLine) {
      if (scanner.token === Token.Colon || scanner.token === Token.Comma) {
        this.#recovery.unexpected(`';' after the value of ${kind}`);
        return undefined;
      }
      end = scanner.end;
      scanner.next();
    }
    const { base } = scanner;
    return { text: scanner.slice(firstStart, end), start: base + firstStart, end: base + end };
  }

  #withArguments(group: OpenGroup, kind: string, start: Position): void {
    const { rule } = group;
    const inner = rule.groups.get(kind);
    if (kind === 'include_file') this.#include(group, start);
    else if (inner !== undefined) this.#group(group, kind, inner, start);
    else if (rule.attributes.has(kind)) this.#complexAttribute(group, kind);
    else if (!this.#leaveFor(kind, start)) this.#uninteresting(group, kind, start);
  }

  /** group ::= KIND `(` arguments `)` `{` statements `}` */
  #group(outer: OpenGroup, kind: string, rule: GroupRule, start: Position): void {
    const scanner = this.#scanner;
    const names = this.#arguments();
    if (names === undefined) return;
    const group = new OpenGroup(kind, names, rule, start, scanner.previousEnd);
    if (scanner.token !== Token.OpenGroup) {
      this.#recovery.unexpected(`'{' after ${describe(group)}`);
      return;
    }
    if (rule !== cellRule) outer.add(group);
    if (rule.isEmpty) {
      this.#skipGroup(kind, start);
      return;
    }
    scanner.next();
    this.#stack.push(group);
    this.#statements(group);
    this.#stack.pop();
    this.#close(group);
    if (rule === cellRule) this.#visitCell(group, outer);
  }

  /** The `}` of a group. */
  #close(group: OpenGroup): void {
    if (this.#returnTo >= 0 || this.#problems.areTooMany) return;
    if (this.#scanner.token === Token.CloseGroup) this.#scanner.next();
    else this.#recovery.unclosed(describe(group), group.start, group.end);
  }

  #complexAttribute(group: OpenGroup, kind: string): void {
    const values = this.#arguments();
    if (values === undefined) return;
    group.set(kind, values);
    this.#accept(Token.Semicolon);
  }

  /** arguments ::= { argument [ `,` ] }; undefined after a report */
  #arguments(): LibertyText[] | undefined {
    const scanner = this.#scanner;
    const list: LibertyText[] = [];
    scanner.next();
    while (scanner.token !== Token.CloseArguments) {
      if (scanner.token === Token.Word || scanner.token === Token.String) {
        list.push(contentOf(scanner));
      } else if (scanner.token !== Token.Comma) {
        this.#recovery.unexpected("')'");
        return undefined;
      }
      scanner.next();
    }
    scanner.next();
    return list;
  }

  /** A group or attribute that tells nothing of the logic, or stands where it cannot. */
  #uninteresting({ rule }: OpenGroup, kind: string, start: Position): void {
    const scanner = this.#scanner;
    if (rule === fileRule) this.#recovery.outside(kind, 'library', start);
    if (rule === fileRule && libraryRule.groups.has(kind)) {
      this.#reopenLibrary(start);
      return;
    }
    if (rule === libraryRule && cellRule.groups.has(kind)) {
      this.#recovery.outside(kind, 'cell', start);
    }
    if (!scanner.skipArguments()) this.#resume(kind, start, ')');
    else {
      scanner.next();
      if (scanner.token === Token.OpenGroup) this.#skipGroup(kind, start);
      else this.#accept(Token.Semicolon);
    }
  }

  #skipGroup(kind: string, start: Position): void {
    if (this.#scanner.skipGroup()) this.#scanner.next();
    else this.#resume(kind, start, '}');
  }

  /** Goes on with the next cell after something of which the end is missing. */
  #resume(kind: string, start: Position, closing: string): void {
    const library = this.#stack.findLastIndex(({ rule }) => rule.groups.has('cell'));
    if (this.#recovery.resume(kind, start, closing))
      this.#returnTo = Math.max(library, this.#floor);
  }

  /** Takes what stands outside of all libraries, from a position on, as part of the last. */
  #reopenLibrary(start: Position): void {
    const file = this.#stack.at(-1)!;
    const last = file.groups.at(-1);
    const library = last ?? new OpenGroup('library', [], libraryRule, start, start);
    if (last === undefined) file.add(library);
    this.#goBack(start);
    this.#stack.push(library);
    this.#statements(library);
    this.#stack.pop();
    this.#accept(Token.CloseGroup);
  }

  /** Leaves the open groups for the one around them that a group of this kind belongs to. */
  #leaveFor(kind: string, start: Position): boolean {
    const depth = this.#stack.findLastIndex(({ rule }) => rule.groups.has(kind));
    if (depth < this.#floor) return false;
    const message = `${kind} cannot stand inside ${describe(this.#stack.at(-1)!)}; is a '}' missing before it?`;
    this.#recovery.fault(message, start, start + kind.length);
    this.#goBack(start);
    this.#returnTo = depth;
    return true;
  }

  /** include_file ::= `include_file` `(` path `)` `;` */
  #include(group: OpenGroup, start: Position): void {
    const values = this.#arguments();
    if (values === undefined) return;
    const [path] = values;
    // The file may be one that includes itself: what follows is looked at before.
    this.#accept(Token.Semicolon);
    if (path === undefined) {
      const end = start + 'include_file'.length;
      this.#recovery.fault('include_file needs the path of a file', start, end);
      return;
    }
    const opened = this.#includes.include(path.text, path.start, path.end);
    if (opened !== undefined) this.#parseSource(opened, group);
  }

  #goBack(position: Position): void {
    this.#scanner.goTo(position - this.#scanner.base);
    this.#scanner.next();
  }

  #accept(token: number): void {
    if (this.#scanner.token === token) this.#scanner.next();
  }
}

function isAfterValue({ token }: Scanner): boolean {
  return (
    token === Token.Semicolon ||
    token === Token.CloseGroup ||
    token === Token.OpenGroup ||
    token === Token.End
  );
}

function contentOf(scanner: Scanner): LibertyText {
  const { base, contentStart, contentEnd } = scanner;
  return { text: scanner.text(), start: base + contentStart, end: base + contentEnd };
}

/** `cell INV` or `ff IQ, IQN`, for messages. */
function describe({ kind, names }: LibertyGroup): string {
  const list = names.map(({ text }) => text).join(', ');
  return list === '' ? `the ${kind} group` : `${kind} ${shortened(list)}`;
}

import type { Source } from '../../diagnostics/source.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameTable } from '../names.js';
import type { Problems } from '../verilog/problems.js';
import type { Includes, OpenSource } from './includes.js';
import { Recovery } from './recovery.js';
import { fileRule, type GroupRule, libraryRule } from './rules.js';
import { Scanner, Token } from './scanner.js';
import type { LibertyGroup, LibertyText } from './syntax.js';

/** A group that is being filled. */
interface OpenGroup extends LibertyGroup {
  readonly rule: GroupRule;
  readonly attributes: Map<string, readonly LibertyText[]>;
  readonly groups: OpenGroup[];
}

/**
 * Reads the statements of a library, keeping what the table of rules names.
 *
 * After a fault reading goes on at the next statement, and where a brace is missing at the next
 * group that cannot stand where it does.
 */
export class LibertyParser {
  readonly #names: NameTable;
  readonly #problems: Problems;
  readonly #includes: Includes;
  // The groups around the present place, the file itself first.
  readonly #stack: OpenGroup[] = [];
  // Index into the stack of the group that the present file began in.
  #floor = 0;
  // Index into the stack of the group that the ones inside it are being left for, or -1.
  #returnTo = -1;
  #scanner!: Scanner;
  #recovery!: Recovery;

  constructor(names: NameTable, problems: Problems, includes: Includes) {
    this.#names = names;
    this.#problems = problems;
    this.#includes = includes;
  }

  /** file ::= { library } */
  parseFile(source: Source): readonly LibertyGroup[] {
    const file: OpenGroup = {
      ...{ kind: 'file', names: [], start: 0, end: 0, rule: fileRule },
      ...{ attributes: new Map(), groups: [] },
    };
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
    const { token, position, endPosition } = scanner;
    if (token === Token.Semicolon) {
      scanner.next();
      return;
    }
    if (token !== Token.Word && token !== Token.String) {
      this.#recovery.unexpected('the name of an attribute or group');
      return;
    }
    const kind = scanner.text();
    scanner.next();
    if (scanner.token === Token.Colon) this.#simpleAttribute(group, kind, position);
    else if (scanner.token === Token.OpenArguments) this.#withArguments(group, kind, position);
    else this.#recovery.unexpected(`':' or '(' after ${shortened(kind)}`, position, endPosition);
  }

  /** The value ends with `;`, or with its line where that is missing. */
  #simpleAttribute(group: OpenGroup, kind: string, start: Position): void {
    const scanner = this.#scanner;
    const isKept = group.rule.attributes.has(kind);
    const colonEnd = scanner.endPosition;
    if (group.rule === fileRule) this.#recovery.outside(kind, 'library', start);
    scanner.next();
    let value: LibertyText | undefined;
    while (!isAfterValue(scanner.token) && (value === undefined || !scanner.isOnNewLine)) {
      if (isKept && (scanner.token === Token.Colon || scanner.token === Token.Comma)) {
        this.#recovery.unexpected(`';' after the value of ${kind}`);
        return;
      }
      value = this.#extended(value);
      scanner.next();
    }
    if (value === undefined) {
      this.#recovery.fault(`the value of ${shortened(kind)} is missing`, start, colonEnd);
    } else if (isKept) group.attributes.set(kind, [value]);
    this.#accept(Token.Semicolon);
  }

  /** A value with the token added to it. */
  #extended(value: LibertyText | undefined): LibertyText {
    const scanner = this.#scanner;
    if (value === undefined) return tokenText(scanner);
    const { bytes, base, start, end } = scanner;
    // The quote of a string that begins the value belongs to it now.
    const first = value.start - base;
    const from = bytes[first - 1] === 34 && value.end < base + start ? first - 1 : first;
    return { text: scanner.slice(from, end), start: base + from, end: base + end };
  }

  #withArguments(group: OpenGroup, kind: string, start: Position): void {
    const { rule } = group;
    const inner = rule.groups.get(kind);
    if (kind === 'include_file') this.#include(group, start);
    else if (inner !== undefined) this.#group(group, kind, inner, start);
    else if (rule.attributes.has(kind)) this.#complexAttribute(group, kind);
    else if (!this.#leaveFor(kind, start)) this.#skipped(rule, kind, start);
  }

  /** group ::= KIND `(` arguments `)` `{` statements `}` */
  #group(outer: OpenGroup, kind: string, rule: GroupRule, start: Position): void {
    const scanner = this.#scanner;
    const names = this.#arguments();
    if (names === undefined) return;
    const end = names.at(-1)?.end ?? scanner.position;
    if (scanner.token !== Token.OpenGroup) {
      this.#recovery.unexpected(`'{' after ${describe(kind, names)}`);
      return;
    }
    const group: OpenGroup = {
      ...{ kind, names, start, end, rule },
      ...{ attributes: new Map(), groups: [] },
    };
    outer.groups.push(group);
    if (rule.isEmpty) this.#skipGroup(kind, start);
    else {
      scanner.next();
      this.#fill(group);
    }
  }

  /** The statements of a group, and its `}`. */
  #fill(group: OpenGroup): void {
    const scanner = this.#scanner;
    this.#stack.push(group);
    this.#statements(group);
    this.#stack.pop();
    if (this.#returnTo >= 0 || this.#problems.areTooMany) return;
    if (scanner.token === Token.CloseGroup) scanner.next();
    else this.#recovery.unclosed(describe(group.kind, group.names), group.start, group.end);
  }

  #complexAttribute(group: OpenGroup, kind: string): void {
    const values = this.#arguments();
    if (values === undefined) return;
    group.attributes.set(kind, values);
    this.#accept(Token.Semicolon);
  }

  /** arguments ::= [ argument { [ `,` ] argument } ]; undefined after a report */
  #arguments(): LibertyText[] | undefined {
    const scanner = this.#scanner;
    const list: LibertyText[] = [];
    scanner.next();
    while (scanner.token !== Token.CloseArguments) {
      if (scanner.token === Token.Word || scanner.token === Token.String) {
        list.push(tokenText(scanner));
      } else if (scanner.token !== Token.Comma) {
        this.#recovery.unexpected("')'");
        return undefined;
      }
      scanner.next();
    }
    scanner.next();
    return list;
  }

  /** A group or attribute of no account here. */
  #skipped(rule: GroupRule, kind: string, start: Position): void {
    const scanner = this.#scanner;
    if (rule === fileRule && libraryRule.groups.has(kind)) {
      this.#reopenLibrary(kind, start);
      return;
    }
    if (rule === fileRule) this.#recovery.outside(kind, 'library', start);
    else if (rule === libraryRule && libraryRule.groups.get('cell')!.groups.has(kind)) {
      this.#recovery.outside(kind, 'cell', start);
    }
    if (!scanner.skipArguments()) {
      this.#returnTo = this.#recovery.resume(kind, start, this.#libraryDepth());
      return;
    }
    scanner.next();
    if (scanner.token === Token.OpenGroup) this.#skipGroup(kind, start);
    else this.#accept(Token.Semicolon);
  }

  #skipGroup(kind: string, start: Position): void {
    if (this.#scanner.skipGroup()) this.#scanner.next();
    else this.#returnTo = this.#recovery.resume(kind, start, this.#libraryDepth());
  }

  /** Takes a cell outside of all libraries as one of the last. */
  #reopenLibrary(kind: string, start: Position): void {
    this.#recovery.outside(kind, 'library', start);
    this.#scanner.goTo(start - this.#scanner.base);
    this.#scanner.next();
    const file = this.#stack.at(-1)!;
    if (file.groups.length === 0) {
      file.groups.push({
        ...{ kind: 'library', names: [], start, end: start, rule: libraryRule },
        ...{ attributes: new Map(), groups: [] },
      });
    }
    const library = file.groups.at(-1)!;
    this.#stack.push(library);
    this.#statements(library);
    this.#stack.pop();
    if (this.#scanner.token === Token.CloseGroup) this.#scanner.next();
  }

  /** Leaves the open groups for the one around them that a group of this kind belongs to. */
  #leaveFor(kind: string, start: Position): boolean {
    const scanner = this.#scanner;
    let depth = this.#stack.length - 2;
    while (depth >= this.#floor && !this.#stack[depth]!.rule.groups.has(kind)) depth--;
    if (depth < this.#floor) return false;
    const open = this.#stack.at(-1)!;
    const what = describe(open.kind, open.names);
    const message = `${kind} cannot stand inside ${what}; a '}' is missing before it`;
    this.#recovery.fault(message, start, start + kind.length);
    scanner.goTo(start - scanner.base);
    scanner.next();
    this.#returnTo = depth;
    return true;
  }

  /** include_file ::= `include_file` `(` path `)` `;` */
  #include(group: OpenGroup, start: Position): void {
    const [path] = this.#arguments() ?? [];
    this.#accept(Token.Semicolon);
    if (path === undefined) {
      const end = start + 'include_file'.length;
      this.#recovery.fault('include_file needs the path of a file', start, end);
      return;
    }
    const opened = this.#includes.include(path.text, path.start, path.end);
    if (opened !== undefined) this.#parseSource(opened, group);
  }

  #libraryDepth(): number {
    const depth = this.#stack.findIndex(({ rule }) => rule === libraryRule);
    return depth < this.#floor ? -1 : depth;
  }

  #accept(token: number): void {
    if (this.#scanner.token === token) this.#scanner.next();
  }
}

import { codeTable, type DiagnosticCode } from '../../../diagnostics/codes.js';
import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import type { Elaboration } from '../scope.js';

/** Anything of the syntax tree that has a place. */
export interface Placed {
  readonly start: Position;
  readonly end: Position;
}

/** What was reported to one list of diagnostics. */
interface Said {
  readonly messages: Set<string>;
  errors: number;
}

const saidTo = new WeakMap<Diagnostics, Said>();

function saidIn(shared: Elaboration): Said {
  let said = saidTo.get(shared.diagnostics);
  if (said === undefined) {
    said = { messages: new Set(), errors: 0 };
    saidTo.set(shared.diagnostics, said);
  }
  return said;
}

/**
 * Adds a diagnostic at a place, once for each place and message: one place is lowered many times
 * where loops are unrolled and modules are instantiated.
 */
export function report(
  shared: Elaboration,
  code: DiagnosticCode,
  place: Placed,
  message: string,
): void {
  const said = saidIn(shared);
  if (codeTable[code].severity === 'error') said.errors++;
  const key = `${place.start} ${message}`;
  if (said.messages.has(key)) return;
  said.messages.add(key);
  shared.diagnostics.add(code, message, shared.sources.span(place.start, place.end));
}

/** How many errors were met so far, repeated ones included; to see whether there were new ones. */
export function errorsMet(shared: Elaboration): number {
  return saidIn(shared).errors;
}

/** A name as written in messages: `u1.a`. */
export function pathText(shared: Elaboration, path: readonly NameId[]): string {
  return path.map((name) => shared.names.text(name)).join('.');
}

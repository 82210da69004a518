import type { Source } from '../diagnostics/source.js';

/** A statement's head is hardly longer. */
const MOST_BYTES = 400;

// A cell or gate, parameters or a delay, a name, and a range where it is an array.
const head =
  /^(\\\S+|[\w$]+)(?:\s*#\s*(?:[\w.]+\s+|\((?:[^()]|\((?:[^()]|\([^()]*\))*\))*\)\s*)|\s+)(\\\S+|[A-Za-z_][\w$]*)\s*(?:\[[^\]]*\]\s*)?\(/;

/**
 * The instance that begins at a place of a Verilog source: `and` and `g1` of `and g1 (y, a, b);`,
 * the cell and its name of `ND2 u7 (.A(a), …);`. Undefined where no named one does.
 */
export function instanceAt(
  source: Source,
  offset: number,
): { readonly cell: string; readonly name: string } | undefined {
  const end = Math.min(offset + MOST_BYTES, source.bytes.length);
  const [, cell, name] = head.exec(source.slice(offset, end)) ?? [];
  return cell === undefined || name === undefined ? undefined : { cell, name };
}

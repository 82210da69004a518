import type { Definition } from './nets.js';

const linesPerChunk = 2000;

/**
 * Writes a design as structural Verilog (IEEE 1364-2005) in chunks of whole lines: every
 * definition once, after those it instantiates, `top` last. Throws a RangeError where two
 * different definitions have one name.
 */
export function* verilog(top: Definition): Generator<string> {
  let chunk: string[] = [];
  for (const definition of leavesFirst(top)) {
    for (const line of definition.lines()) {
      chunk.push(line);
      if (chunk.length === linesPerChunk) {
        yield `${chunk.join('\n')}\n`;
        chunk = [];
      }
    }
  }
  if (chunk.length > 0) yield `${chunk.join('\n')}\n`;
}

function leavesFirst(top: Definition): Iterable<Definition> {
  const byName = new Map<string, Definition>();
  const visit = (definition: Definition): void => {
    const known = byName.get(definition.name);
    if (known === definition) return;
    if (known) throw new RangeError(`two different modules are named ${definition.name}`);
    for (const part of definition.parts()) visit(part);
    byName.set(definition.name, definition);
  };
  visit(top);
  return byName.values();
}

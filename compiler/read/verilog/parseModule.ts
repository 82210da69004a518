import { InstanceTable } from './instances.js';
import { Keyword } from './keywords.js';
import { parseItems } from './parseItems.js';
import { parseHeaderParameters, parsePorts } from './parsePorts.js';
import type { Parser } from './parser.js';
import type { HeaderPort, Item, ModuleSyntax } from './syntax.js';
import { Token } from './tokens.js';

const NO_STOPS: ReadonlySet<number> = new Set([Keyword.endmodule, Keyword.module]);

/** (`module` | `macromodule`) name [ parameters ] [ ports ] `;` { item } `endmodule` */
export function parseModule(p: Parser): ModuleSyntax | undefined {
  const { tokens } = p;
  const { start, end } = tokens;
  const { isCell, defaultNetType, unconnectedDrive } = p.preprocessor.settings;
  tokens.next();
  const nameStart = tokens.start;
  const items: Item[] = [];
  let ports: HeaderPort[] = [];
  let name = 0;
  p.instances = new InstanceTable(() => tokens.at / tokens.text.length);
  p.beginItem(0);
  p.attempt(() => {
    name = p.expectName('the name of the module');
    parseHeaderParameters(p, items);
    ports = parsePorts(p, items);
    p.expect(Token.Semicolon, "';' after the header of the module");
  }, NO_STOPS);
  parseItems(p, items, Keyword.endmodule);
  if (!p.accept(Keyword.endmodule) && !p.problems.areTooMany) {
    const message = `the module '${p.names.text(name)}' has no 'endmodule' before ${p.found()}`;
    p.problems.add('syntax-error', message, start, end);
  }
  if (name === 0) return undefined;
  const settings = { isCell, defaultNetType, unconnectedDrive };
  const { lastEnd } = tokens;
  const { instances } = p;
  return { name, nameStart, ...settings, ports, items, instances, start, end: lastEnd };
}

import { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import { InstanceTable } from '../instances.js';
import type { Item, ModuleSyntax } from '../syntax.js';
import { ModuleBody } from './body.js';
import { type BoxPort, boxTemplate } from './boxTemplate.js';
import type { Definition, Design } from './design.js';
import type { Overrides } from './overrides.js';
import { bindPorts } from './ports.js';
import { declareModule } from './scopes.js';
import { Flag } from './symbols.js';
import type { Template, TemplatePort } from './template.js';

/**
 * Compiles a definition as a black box: of a module only the parameters and ports are looked at,
 * so that whatever else stands in it may be beyond what can be compiled.
 */
export function compileBox(
  design: Design,
  definition: Definition,
  overrides: Overrides,
  place: Position,
): Template {
  const name = design.text(definition.name);
  if ('template' in definition) {
    // What is wrong with the cell does not matter.
    const { names, sources, budget } = design;
    const { ports } = definition.template(
      { names, sources, budget, diagnostics: new Diagnostics() },
      place,
    );
    return boxTemplate(name, boxPorts(design, ports), false);
  }
  if ('items' in definition) {
    const body = new ModuleBody(design, headerOf(definition), undefined);
    declareModule(body, overrides);
    return boxTemplate(name, boxPorts(design, bindPorts(body).ports), true);
  }
  const ports = definition.ports.map((port, place) => ({
    name: port,
    text: design.text(port),
    direction: place === 0 ? Flag.Output : Flag.Input,
    width: 1,
    range: undefined,
  }));
  return boxTemplate(name, ports, true);
}

function boxPorts(design: Design, ports: readonly TemplatePort[]): BoxPort[] {
  return ports.map((port) => ({
    ...port,
    text: design.text(port.name),
    // A port that is several signals is a vector to its instances.
    range: port.range ?? (port.width > 1 ? { msb: port.width - 1, lsb: 0 } : undefined),
  }));
}

const headerOf = (module: ModuleSyntax): ModuleSyntax => ({
  ...module,
  items: module.items.filter(isOfHeader),
  instances: new InstanceTable(),
});

// Constant functions may work out widths.
const isOfHeader = (item: Item): boolean =>
  item.kind === 'parameter' ||
  item.kind === 'function' ||
  (item.kind === 'declaration' && item.direction !== undefined);

import type { CircuitBuilder } from '../../../circuit/builder.js';
import { type NetId, netId } from '../../../circuit/ids.js';
import type { Span } from '../../../diagnostics/source.js';
import type { ModuleSyntax } from '../syntax.js';
import type { Design } from './design.js';
import { Flag } from './symbols.js';
import { Drive, type Template, type TemplatePort } from './template.js';

/** Reports what keeps a module from being the top: how it treats the nets of its ports. */
export function checkTopPorts(design: Design, module: ModuleSyntax, top: Template): void {
  for (const [index, port] of top.ports.entries()) {
    const span = placeOf(design, module, top, index);
    if (port.name === 0 && port.width > 0) {
      const message = `port ${index + 1} of the top module has no name; give it one: .name(…)`;
      design.diagnostics.add('not-supported', message, span);
    } else if (isOutput(top, port)) {
      const open = bitsOf(port).filter((place) => top.drives[place] === Drive.None);
      const name = design.text(port.name);
      if (open.length > 0) design.undriven.add(openOutput(name, port, open.length), span);
    }
  }
  for (const { first, second } of top.repeats) checkRepeat(design, module, top, first, second);
}

/**
 * Gives the circuit the ports of its top module; an inout that is driven inside is an output, and
 * one that a supply drives is no port. `boundary` is in nets of the circuit, and `supply` tells the
 * level of such a net, or -1.
 */
export function addTopPorts(
  builder: CircuitBuilder,
  design: Design,
  module: ModuleSyntax,
  top: Template,
  boundary: Uint32Array,
  supply: (net: number) => number,
): void {
  const positions = top.ports.map((_, index) => placeOf(design, module, top, index));
  for (const [index, port] of top.ports.entries()) {
    const nets: NetId[] = bitsOf(port).map((place) => netId(boundary[place]!));
    if (port.width === 0 || (port.direction !== Flag.Output && nets.every(isSupply))) continue;
    const name = design.text(port.name);
    const range = port.range ?? (port.width > 1 ? { msb: port.width - 1, lsb: 0 } : undefined);
    const span = positions[index]!;
    builder.at(design.sources.sources.indexOf(span.source), span.start);
    if (port.direction !== Flag.Output && isDrivenInside(top, port)) {
      reportDriven(design, port, name, span);
    }
    if (isOutput(top, port)) builder.output(name, nets, range);
    else if (!isDrivenInside(top, port)) builder.input(name, nets, range);
  }

  function isSupply(net: NetId): boolean {
    return supply(net) >= 0;
  }
}

function reportDriven(
  { diagnostics }: Design,
  { direction }: TemplatePort,
  name: string,
  span: Span,
): void {
  if (direction === Flag.Inout) {
    const message =
      `inout ${name} of the top module is driven inside, so that it becomes an output: ` +
      'what drives it from outside has no place in a model; split it if it also is an input';
    diagnostics.add('inout-as-output', message, span);
  } else {
    const message = `input ${name} of the top module is also driven inside; leave one of the two drivers`;
    diagnostics.add('net-multiply-driven', message, span);
  }
}

function isOutput(top: Template, port: TemplatePort): boolean {
  if (port.direction !== Flag.Inout) return port.direction === Flag.Output;
  return isDrivenInside(top, port);
}

// A pull is no driver: the outside overrides it.
function isDrivenInside({ drives }: Template, port: TemplatePort): boolean {
  return bitsOf(port).some(
    (place) => drives[place] === Drive.Full || drives[place] === Drive.Shared,
  );
}

function bitsOf({ offset, width }: TemplatePort): number[] {
  return Array.from({ length: width }, (_, bit) => offset + bit);
}

function openOutput(name: string, { width }: TemplatePort, open: number): string {
  return open === width
    ? `output ${name} of the top module has no driver`
    : `${open} of the ${width} bits of output ${name} of the top module have no driver`;
}

/** Where the signal of a port is declared if it has the port's name, else the port in the header. */
function placeOf(
  { sources }: Design,
  module: ModuleSyntax,
  { scope, ports }: Template,
  index: number,
): Span {
  const symbol = scope?.symbols.find(ports[index]!.name) ?? -1;
  if (scope !== undefined && symbol >= 0) {
    return sources.span(scope.symbols.start(symbol), scope.symbols.end(symbol));
  }
  const { start, end } = module.ports[index] ?? module;
  return sources.span(start, end);
}

/** Two inputs that are one net inside would both drive it. */
function checkRepeat(
  design: Design,
  module: ModuleSyntax,
  top: Template,
  first: number,
  second: number,
): void {
  const portAt = (place: number): number =>
    top.ports.findIndex(({ offset, width }) => offset <= place && place < offset + width);
  const ports = [portAt(first), portAt(second)];
  if (ports.some((port) => isOutput(top, top.ports[port]!))) return;
  const [a, b] = ports.map((port) => design.text(top.ports[port]!.name));
  const { start, end } = module.ports[ports[1]!] ?? module;
  const message = `the ports ${a} and ${b} of the top module are one net inside; remove one of them`;
  design.diagnostics.add('net-multiply-driven', message, design.sources.span(start, end));
}

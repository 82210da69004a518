import type { CircuitBuilder } from '../../../circuit/builder.js';
import { isWeak, NetType, PartKind, packTraits } from '../../../circuit/busParts.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import type { Design } from './design.js';
import { wordSpan } from './messages.js';
import type { PlacedBox } from './stamp.js';
import { Flag } from './symbols.js';
import type { TemplatePort } from './template.js';

/**
 * Makes the ports of black boxes ports of the circuit, named by the path of the instance: its
 * outputs become inputs, its inputs outputs. A port of open direction is an output of the box where
 * nothing else drives what it is connected to, and an input of it otherwise. Ports that are not
 * connected are left out.
 *
 * All other drivers must be in place, the inputs of the circuit among them.
 */
export function addBoxPorts(
  builder: CircuitBuilder,
  design: Design,
  boxes: readonly PlacedBox[],
): void {
  if (boxes.length === 0) return;
  const adder = new BoxPortAdder(builder, design);
  const pins = boxes.flatMap((box) => pinsOf(design, box));
  for (const pin of pins) if (pin.port.direction === Flag.Output) adder.addInput(pin);
  for (const pin of pins) if (pin.port.direction === Flag.Inout) adder.decide(pin);
  for (const pin of pins) if (pin.port.direction === Flag.Input) adder.addOutput(pin);
}

/** A connected port of an instance of a black box. */
interface BoxPin {
  readonly box: PlacedBox;
  readonly port: TemplatePort;
  readonly name: string;
  readonly nets: readonly NetId[];
}

function pinsOf(design: Design, box: PlacedBox): BoxPin[] {
  return box.template.ports.flatMap((port) => {
    const nets = box.nets.slice(port.offset, port.offset + port.width);
    if (nets.every((net) => net === NO_NET)) return [];
    return [{ box, port, name: `${box.path}.${design.text(port.name)}`, nets }];
  });
}

class BoxPortAdder {
  readonly #builder: CircuitBuilder;
  readonly #design: Design;
  /** Nets with parts of buses, and whether one of these is more than a pull. */
  readonly #buses = new Map<NetId, boolean>();
  /** Nets that a port of open direction drives, with its name. */
  readonly #taken = new Map<NetId, string>();
  readonly #names: Set<string>;

  constructor(builder: CircuitBuilder, design: Design) {
    this.#builder = builder;
    this.#design = design;
    this.#names = new Set(builder.portNames());
    const { busParts } = builder;
    for (let i = 0; i < busParts.count; i++) {
      const part = busParts.at(i);
      if (part.kind === PartKind.TwoWay) continue;
      const isDriver = !isWeak(packTraits(part)) || this.#buses.get(part.net) === true;
      this.#buses.set(part.net, isDriver);
    }
  }

  /** What the box drives comes from outside the circuit. */
  addInput(pin: BoxPin): void {
    if (!this.#begin(pin)) return;
    const driven = pin.nets.map((net) => this.#drivenFor(net));
    this.#builder.input(pin.name, driven, pin.port.range);
  }

  addOutput(pin: BoxPin): void {
    if (!this.#begin(pin)) return;
    const nets = pin.nets.map((net) => (net === NO_NET ? this.#builder.net() : net));
    this.#builder.output(pin.name, nets, pin.port.range);
  }

  decide(pin: BoxPin): void {
    const { nets, box } = pin;
    const other = nets.map((net) => this.#taken.get(net)).find((name) => name !== undefined);
    const connected = nets.filter((net) => net !== NO_NET);
    const driven = connected.filter((net) => this.#isDriven(net));
    if (other !== undefined) {
      this.#refuse(pin, `nothing but black boxes drives it, ${other} among them`);
    } else if (driven.length === connected.length) this.addOutput(pin);
    else if (driven.length > 0) this.#refuse(pin, 'some of its bits are driven and some are not');
    else {
      this.addInput(pin);
      for (const net of connected) this.#taken.set(net, pin.name);
    }
    this.#at(box);
  }

  #isDriven(net: NetId): boolean {
    return this.#builder.isDriven(net) || this.#buses.get(net) === true;
  }

  // An input cannot share its net with other drivers; as a part of a bus it can.
  #drivenFor(net: NetId): NetId {
    if (net === NO_NET) return this.#builder.net();
    const isPlain = this.#builder.netType(net) === NetType.Plain && !this.#buses.has(net);
    if (isPlain) return net;
    const own = this.#builder.net();
    this.#builder.busPart(net, own, NO_NET, packTraits({ kind: PartKind.Driver }));
    return own;
  }

  #begin({ name, box }: BoxPin): boolean {
    this.#at(box);
    if (!this.#names.has(name)) {
      this.#names.add(name);
      return true;
    }
    const message = `the circuit has a port ${name} already, as this port of a black box would be called; rename one of them`;
    this.#design.diagnostics.add('name-redeclared', message, this.#spanOf(box));
    return false;
  }

  #refuse({ name, box }: BoxPin, reason: string): void {
    const message =
      `whether ${name} of a black box is an input or an output cannot be told: ${reason}; ` +
      `give a file that declares module ${box.template.name} and the direction of its ports`;
    this.#design.diagnostics.add('not-supported', message, this.#spanOf(box));
  }

  #at({ origin }: PlacedBox): void {
    this.#builder.at(origin.source, origin.offset);
  }

  #spanOf({ origin }: PlacedBox) {
    return wordSpan(this.#design.sources.sources[origin.source]!, origin.offset);
  }
}

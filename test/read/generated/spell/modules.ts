import type { Item, Module, Signal } from '../design/model.js';
import type { Choices } from './choices.js';
import { ItemContext } from './context.js';
import { ExpressionWriter } from './expressions.js';
import { spellInstance } from './instances.js';
import { chooseNested } from './nesting.js';
import { spellOperation } from './operations.js';
import { spellLatch, spellRegister } from './registers.js';

/** The text of a module. Helpers that it needs are added to `helpers`. */
export function spellModule(module: Module, choices: Choices, helpers: Set<string>): string {
  return new ModuleSpeller(module, choices, helpers).text();
}

class ModuleSpeller {
  readonly #module: Module;
  readonly #choices: Choices;
  readonly #writer: ExpressionWriter;
  readonly #context: ItemContext;

  constructor(module: Module, choices: Choices, helpers: Set<string>) {
    this.#module = module;
    this.#choices = choices;
    this.#writer = new ExpressionWriter(choices);
    this.#context = new ItemContext(module, this.#writer, helpers);
    for (const [target, operation] of chooseNested(module, choices)) {
      this.#writer.inlined.set(target, operation);
    }
  }

  text(): string {
    const isNested = (item: Item): boolean =>
      item.kind === 'operation' && this.#writer.inlined.has(item.target);
    const items = this.#module.items.filter((item) => !isNested(item));
    // What an item is written as decides how its target is declared, so that items come first.
    const texts = items.map((item) => this.#item(item));
    const order = this.#choices.pick('files', 2) === 1 ? texts.toReversed() : texts;
    const attribute = (): string =>
      this.#choices.of('trivia', ['', '', '', '(* keep *) ', '(* a = 1, b = "x" *) ']);
    const body = order.filter((text) => text !== ';').map((text) => `  ${attribute()}${text}`);
    const head = this.#choices.pick('styles', 2) === 1 ? this.#ansiHeader() : this.#plainHeader();
    return [...head, ...this.#declarations(), ...body, 'endmodule', ''].join('\n');
  }

  #item(item: Item): string {
    switch (item.kind) {
      case 'operation':
        return spellOperation(this.#context, item);
      case 'register':
        return spellRegister(this.#context, item);
      case 'latch':
        return spellLatch(this.#context, item);
      case 'instance':
        return spellInstance(this.#context, item);
    }
  }

  get #inputs(): readonly Signal[] {
    const { clock, reset, inputs } = this.#module;
    return [clock, reset, ...inputs];
  }

  #parameter(): string {
    const { parameter, parameterValue } = this.#module;
    const value = this.#writer.number(parameterValue, parameter.width);
    return `parameter [3:0] ${this.#context.name(parameter)} = ${value}`;
  }

  /** Directions and types in the header (clause 12.3.4). */
  #ansiHeader(): string[] {
    const ports = [
      ...this.#inputs.map((port) => `input ${this.#netType('styles')}${this.#declared(port)}`),
      ...this.#module.outputs.map((port) => `output ${this.#typeOf(port)}${this.#declared(port)}`),
    ];
    return [
      `module ${this.#module.name} #(${this.#parameter()}) (`,
      `  ${ports.join(',\n  ')}`,
      ');',
    ];
  }

  /** Names in the header, all else behind it (clause 12.3.3). */
  #plainHeader(): string[] {
    const { outputs, name } = this.#module;
    const ports = [...this.#inputs, ...outputs];
    const names = ports.map((port) => {
      const own = this.#context.name(port);
      return this.#choices.rarely('styles', 4) ? `.${own}(${this.#context.name(port)})` : own;
    });
    const lines = [`module ${name} (${names.join(', ')});`, `  ${this.#parameter()};`];
    for (const port of this.#inputs) lines.push(`  input ${this.#declared(port)};`);
    for (const port of outputs) {
      const type = this.#typeOf(port);
      const isTogether = type === '' || this.#choices.pick('styles', 2) === 1;
      if (isTogether) lines.push(`  output ${type}${this.#declared(port)};`);
      else lines.push(...this.#twice(port, type));
    }
    return lines;
  }

  /** Direction and type of a port in a declaration each, in either order. */
  #twice(port: Signal, type: string): string[] {
    const range = this.#writer.range(port);
    const direction = `  output ${range}${this.#context.name(port)};`;
    const typed = `  ${type}${this.#declared(port)};`;
    return this.#choices.pick('styles', 2) === 1 ? [typed, direction] : [direction, typed];
  }

  #netType(family: 'styles'): string {
    return this.#choices.of(family, ['', 'wire ', 'tri ']);
  }

  #typeOf(signal: Signal): string {
    if (this.#context.variables.has(signal)) return 'reg ';
    const type = this.#context.netTypes.get(signal);
    return type === undefined ? this.#netType('styles') : `${type} `;
  }

  /** Range, name and power-up value. */
  #declared(signal: Signal): string {
    const value = this.#context.initialValues.get(signal);
    const name = `${this.#writer.range(signal)}${this.#context.name(signal)}`;
    return value === undefined ? name : `${name} = ${value}`;
  }

  #declarations(): string[] {
    const { inlined } = this.#writer;
    const shown = this.#module.inner.filter(
      (signal) => !inlined.has(signal) && !this.#context.declared.has(signal),
    );
    return shown.map((signal) => `  ${this.#typeOf(signal) || 'wire '}${this.#declared(signal)};`);
  }
}

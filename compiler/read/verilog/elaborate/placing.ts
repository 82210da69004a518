import type { Position } from '../../../diagnostics/sourceMap.js';
import { listed } from '../../listed.js';
import type { NameId } from '../../names.js';
import { hintOf } from '../../nearest.js';
import { evaluateConstant } from '../behaviour/index.js';
import type { Constant } from '../scope.js';
import type { RangeSyntax } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import { type ModuleBody, NOT_PLACED } from './body.js';
import { evaluateRange } from './constants.js';
import { defparamsOf } from './defparams.js';
import { NO_TEMPLATE } from './design.js';
import { type DeepOverride, noOverrides, type Overrides } from './overrides.js';
import { SymbolKind, type SymbolTable } from './symbols.js';
import { wordBefore, wordFrom } from './wordNear.js';

/** For so many instances room is made at once. */
const MANY = 10_000;

/**
 * Gives every instance its name in its scope. The value of the symbol is the instance's number
 * among those of modules and primitives, or `NOT_PLACED` for a built-in gate.
 */
export function nameInstances(body: ModuleBody): void {
  const table = body.module.instances;
  const areMany = table.count >= MANY;
  const positionOf = (number: number): Position => positionOfInstance(body, number);
  let number = 0;
  for (const { scope, item } of body.instances) {
    const { symbols } = scope;
    for (let instance = item.first; instance < item.first + item.count; instance++) {
      const value = table.module(instance) < 0 ? NOT_PLACED : number++;
      const name = table.name(instance);
      if (name === 0 || isNameTaken(body, scope, name, table.position(instance))) continue;
      if (areMany && value !== NOT_PLACED) symbols.addInstance(name, value, positionOf);
      else addName(symbols, name, value, table.position(instance));
    }
  }
  body.placed.extend(number, NOT_PLACED);
}

function positionOfInstance(body: ModuleBody, wanted: number): Position {
  let position = 0;
  forEachInstance(body, (_, instance, number) => {
    if (number === wanted) position = body.module.instances.position(instance);
  });
  return position;
}

/**
 * Makes a child of every instance of a module or primitive, several of an array, with nothing
 * connected yet. Their order is that of the instances; an array begins with its rightmost element.
 */
export function placeInstances(body: ModuleBody, deep: readonly DeepOverride[]): void {
  const defparams = defparamsOf(body, deep);
  const isPlaced = new Uint8Array(body.placed.length);
  const { instances } = body.module;
  if (isPlaced.length >= MANY) {
    body.children.reserve(isPlaced.length, instances.connectionStart(instances.count));
  }
  const place = (scope: BlockScope, instance: number, number: number): void => {
    if (isPlaced[number] === 1) return;
    isPlaced[number] = 1;
    placeInstance(body, scope, instance, number, defparams.get(number));
  };
  body.placeEarly = (wanted) => {
    forEachInstance(body, (scope, instance, number) => {
      if (number === wanted) place(scope, instance, number);
    });
  };
  forEachInstance(body, place);
  body.placeEarly = undefined;
}

/** Calls `visit` for every instance of a module or primitive, and its number among these. */
function forEachInstance(
  body: ModuleBody,
  visit: (scope: BlockScope, instance: number, number: number) => void,
): void {
  const table = body.module.instances;
  let number = 0;
  for (const { scope, item } of body.instances) {
    for (let instance = item.first; instance < item.first + item.count; instance++) {
      if (table.module(instance) >= 0) visit(scope, instance, number++);
    }
  }
}

function isNameTaken(
  body: ModuleBody,
  { symbols }: BlockScope,
  name: NameId,
  position: Position,
): boolean {
  if (symbols.find(name) < 0) return false;
  const { start, end } = wordFrom(body, name, position);
  body.reportTaken(symbols, name, start, end);
  return true;
}

function addName(symbols: SymbolTable, name: NameId, value: number, position: Position): void {
  // The end of the word is found out when a message needs it.
  symbols.add({ name, kind: SymbolKind.Instance, value, start: position, end: position });
}

function placeInstance(
  body: ModuleBody,
  scope: BlockScope,
  instance: number,
  number: number,
  defparams: Overrides | undefined,
): void {
  const { design, module } = body;
  const table = module.instances;
  const definition = table.module(instance);
  const position = table.position(instance);
  const extras = table.extras(instance);
  const plain = extras === undefined && defparams === undefined ? design.plain(definition) : -1;
  if (plain >= 0 && table.name(instance) !== 0) {
    // Most instances of a netlist: a cell that is known already, without parameters.
    const name = design.makesScope(definition) ? table.name(instance) : 0;
    body.placed.set(number, addPlainChild(body, plain, name, scope, position));
    return;
  }
  if (design.definition(definition) === undefined) {
    // The ports of an unknown black box are known when its connections are.
    if (!design.blackBoxes.has(definition)) design.unknown.add(table, instance);
    return;
  }
  const isPrimitive = design.isPrimitive(definition);
  // What looks like parameters of a primitive is its delay.
  const overrides = isPrimitive ? noOverrides : overridesOf(body, scope, instance, defparams);
  const name = table.name(instance);
  const outer = { host: body, scope, name };
  const template = overrides && design.template(definition, overrides, position, outer);
  if (template === undefined || template === NO_TEMPLATE) return;
  const hasScope = design.makesScope(definition);
  if (name === 0 && hasScope) {
    const { start, end } = body.wordAt(position);
    const message = `the instance of module ${body.text(definition)} has no name; give it one`;
    body.report('syntax-error', message, start, end);
  }
  const placed = { template, name: hasScope ? name : 0, scope, position };
  if (extras?.range === undefined) body.placed.set(number, addChild(body, placed));
  else placeArray(body, placed, number, extras.range);
}

/** What a child is made of. */
interface Placed {
  readonly template: number;
  /** 0 where it makes no scope. */
  readonly name: NameId;
  readonly scope: BlockScope;
  readonly position: Position;
}

function addPlainChild(
  { design, children, sources }: ModuleBody,
  template: number,
  name: NameId,
  scope: BlockScope,
  position: Position,
): number {
  const { boundary } = design.templates[template]!;
  const source = sources.indexOf(position);
  const offset = position - sources.base(source);
  return children.add(template, name, scope.index, source, offset, boundary.length);
}

function addChild(body: ModuleBody, { template, name, scope, position }: Placed): number {
  const { design, children } = body;
  const { boundary, outerNets = [], outerMemories = [] } = design.templates[template]!;
  const child = addPlainChild(body, template, name, scope, position);
  for (const { net, outside } of outerNets) {
    const place = boundary.indexOf(net);
    if (place < 0) children.adopt(child, net, outside);
    else children.setPort(child, place, outside);
  }
  for (const { memory, outside } of outerMemories) children.adoptMemory(child, memory, outside);
  return child;
}

function placeArray(body: ModuleBody, placed: Placed, number: number, syntax: RangeSyntax): void {
  const range = evaluateRange(syntax, placed.scope);
  if (range === undefined) return;
  const { msb, lsb } = range;
  const { symbols } = placed.scope;
  const { start, end } = syntax;
  const step = msb < lsb ? -1 : 1;
  body.arrayLengths ??= new Map();
  body.arrayLengths.set(number, Math.abs(msb - lsb) + 1);
  for (let index = lsb; index !== msb + step; index += step) {
    const base = placed.name;
    const name = base === 0 ? 0 : body.names.internText(`${body.text(base)}[${index}]`);
    const child = addChild(body, { ...placed, name });
    if (index === lsb) body.placed.set(number, child);
    if (name === 0 || !body.isFree(placed.scope, name, start, end)) continue;
    const value = body.placed.length;
    body.placed.push(child);
    symbols.add({ name, kind: SymbolKind.Instance, value, start, end });
  }
}

/** What `#(…)` and `defparam` give; undefined after a report. */
function overridesOf(
  body: ModuleBody,
  scope: BlockScope,
  instance: number,
  defparams: Overrides | undefined,
): Overrides | undefined {
  const parameters = body.module.instances.extras(instance)?.parameters ?? [];
  if (parameters.length === 0 && defparams === undefined) return noOverrides;
  const definition = body.module.instances.module(instance);
  const known = body.design.parametersOf(definition);
  const values = new Map<NameId, Constant>();
  let failed = false;
  for (const [place, { name, value }] of parameters.entries()) {
    const parameter = name === 0 ? known[place] : known.find((each) => each === name);
    if (parameter === undefined) {
      const at = name === 0 ? value : wordBefore(body, name, value.start);
      reportParameter(body, definition, name, at);
      failed = true;
      continue;
    }
    const constant = evaluateConstant(value, scope);
    if (constant !== undefined) values.set(parameter, constant);
    else failed = true;
  }
  for (const [name, value] of defparams?.values ?? []) {
    if (known.includes(name)) values.set(name, value);
    else {
      reportParameter(
        body,
        definition,
        name,
        body.wordAt(body.module.instances.position(instance)),
      );
      failed = true;
    }
  }
  return failed ? undefined : { values, deep: defparams?.deep ?? [] };
}

function reportParameter(
  body: ModuleBody,
  module: NameId,
  name: NameId,
  { start, end }: { readonly start: Position; readonly end: Position },
): void {
  const known = body.design.parametersOf(module).map((each) => body.text(each));
  const list = known.length === 0 ? 'it has none' : `it has ${listed(known)}`;
  const text = body.text(module);
  if (name !== 0) {
    const own = body.text(name);
    const message = `module ${text} has no parameter ${own}; ${list}${hintOf(own, known)}`;
    body.report('name-undeclared', message, start, end);
  } else {
    body.report(
      'port-count',
      `more parameter values than module ${text} takes; ${list}`,
      start,
      end,
    );
  }
}

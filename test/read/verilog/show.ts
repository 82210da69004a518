import type { NameTable } from '../../../compiler/read/names.js';
import {
  builtinGates,
  ConnectionKind,
  POSITIONAL,
} from '../../../compiler/read/verilog/instances.js';
import type {
  EventSyntax,
  Expression,
  GenerateBlock,
  Item,
  ModuleSyntax,
  NumberExpression,
  RangeSyntax,
  Statement,
  Strength,
} from '../../../compiler/read/verilog/syntax.js';

/** An expression with all its parentheses. */
export function showExpression(e: Expression, names: NameTable): string {
  const show = (part: Expression): string => showExpression(part, names);
  switch (e.kind) {
    case 'number':
      return showNumber(e);
    case 'real':
      return `real ${e.value}`;
    case 'string':
      return JSON.stringify(e.text);
    case 'name':
      return showPath(e.path, names, e.indices);
    case 'select':
      return `${show(e.base)}[${show(e.index)}]`;
    case 'part': {
      const sign = { range: ':', up: '+:', down: '-:' }[e.mode];
      return `${show(e.base)}[${show(e.left)}${sign}${show(e.right)}]`;
    }
    case 'concat':
      return `{${e.parts.map(show).join(',')}}`;
    case 'replicate':
      return `{${show(e.count)}{${e.parts.map(show).join(',')}}}`;
    case 'unary':
      return `(${e.operator}${show(e.operand)})`;
    case 'binary':
      return `(${show(e.left)}${e.operator}${show(e.right)})`;
    case 'conditional':
      return `(${show(e.condition)}?${show(e.whenTrue)}:${show(e.whenFalse)})`;
    case 'call':
      return `${showPath(e.path, names)}(${e.arguments.map(show).join(',')})`;
  }
}

/** Decimal where it is a plain one, else width, `s` if signed, and the digits `0 1 x z`. */
export function showNumber(e: NumberExpression): string {
  if (e.width === undefined && e.signed && e.unknown === 0n) return e.value.toString();
  const written = (e.value | e.unknown).toString(2).length;
  const length = e.width ?? written;
  let bits = '';
  for (let i = BigInt(length) - 1n; i >= 0n; i--) {
    const isUnknown = (e.unknown >> i) & 1n;
    if (isUnknown) bits += (e.highZ >> i) & 1n ? 'z' : 'x';
    else bits += (e.value >> i) & 1n;
  }
  const fill = e.width === undefined && e.extends !== 'zero' ? `${e.extends}…` : '';
  return `${e.width ?? ''}'${e.signed ? 's' : ''}${fill}${bits}`;
}

function showPath(
  path: readonly number[],
  names: NameTable,
  indices?: readonly (Expression | undefined)[],
): string {
  const parts = path.map((id, i) => {
    const index = indices?.[i];
    return names.text(id) + (index === undefined ? '' : `[${showExpression(index, names)}]`);
  });
  return parts.join('.');
}

function showRange(range: RangeSyntax | undefined, names: NameTable): string {
  if (range === undefined) return '';
  return `[${showExpression(range.left, names)}:${showExpression(range.right, names)}]`;
}

function showStrength(strength: Strength | undefined): string {
  return strength === undefined ? '' : `(${strength.zero}0,${strength.one}1)`;
}

/** A statement on one line. */
export function showStatement(s: Statement, names: NameTable): string {
  const show = (e: Expression): string => showExpression(e, names);
  const inner = (body: Statement): string => showStatement(body, names);
  switch (s.kind) {
    case 'block': {
      const declarations = s.declarations.flatMap((item) => showItem(item, undefined, names));
      const name = s.name === 0 ? '' : `:${names.text(s.name)}`;
      return [`begin${name}`, ...declarations, ...s.body.map(inner), 'end'].join(' ');
    }
    case 'assign':
      return `${show(s.target)}${s.blocking ? '=' : '<='}${s.delayed ? '# ' : ''}${show(s.value)};`;
    case 'if': {
      const otherwise = s.whenFalse === undefined ? '' : ` else ${inner(s.whenFalse)}`;
      return `if(${show(s.condition)}) ${inner(s.whenTrue)}${otherwise}`;
    }
    case 'case': {
      const branches = s.items.map((item) => showBranch(item.labels, inner(item.body), names));
      const attributes = s.attributes.length === 0 ? '' : `(*${s.attributes.join(',')}*)`;
      return `${attributes}${s.mode}(${show(s.subject)}) ${branches.join(' ')} endcase`;
    }
    case 'for':
      return `for(${inner(s.initial)}${show(s.condition)};${inner(s.step)}) ${inner(s.body)}`;
    case 'repeat':
      return `repeat(${show(s.count)}) ${inner(s.body)}`;
    case 'while':
      return `while(${show(s.condition)}) ${inner(s.body)}`;
    case 'forever':
      return `forever ${inner(s.body)}`;
    case 'callTask':
      return `${showPath(s.path, names)}(${s.arguments.map(show).join(',')});`;
    case 'event':
      return `@(${s.events?.map((event) => showEvent(event, names)).join(',') ?? '*'}) ${inner(s.body)}`;
    case 'delay':
      return `# ${inner(s.body)}`;
    case 'wait':
      return `wait(${show(s.condition)}) ${inner(s.body)}`;
    case 'disable':
      return `disable ${showPath(s.path, names)};`;
    case 'procedural':
      return `<${s.keyword}>`;
    case 'null':
      return ';';
  }
}

function showEvent(event: EventSyntax, names: NameTable): string {
  const edge = event.edge === 'any' ? '' : `${event.edge} `;
  return edge + showExpression(event.expression, names);
}

function showBranch(labels: readonly Expression[], body: string, names: NameTable): string {
  const label = labels.map((e) => showExpression(e, names)).join(',');
  return `${label === '' ? 'default' : label}: ${body}`;
}

/** An item on one line; one line for each instance, which need the module for their table. */
export function showItem(item: Item, module: ModuleSyntax | undefined, names: NameTable): string[] {
  const show = (e: Expression): string => showExpression(e, names);
  const block = (body: GenerateBlock): string => showBlock(body, module, names);
  switch (item.kind) {
    case 'declaration': {
      const words = [item.direction, item.type, showStrength(item.strength)];
      words.push(item.signed ? 'signed' : '', showRange(item.range, names));
      const declared = [...item.names].map(
        (one) =>
          names.text(one.name) +
          one.dimensions.map((range) => showRange(range, names)).join('') +
          (one.value === undefined ? '' : `=${show(one.value)}`),
      );
      return [`${words.filter(Boolean).join(' ')} ${declared.join(',')};`];
    }
    case 'parameter': {
      const words = [item.local ? 'localparam' : 'parameter', item.type];
      words.push(item.signed ? 'signed' : '', showRange(item.range, names));
      const values = item.values.map((one) => `${names.text(one.name)}=${show(one.value)}`);
      return [`${words.filter(Boolean).join(' ')} ${values.join(',')};`];
    }
    case 'assign': {
      const strength = showStrength(item.strength);
      return [`assign ${strength}${show(item.target)}=${show(item.value)};`];
    }
    case 'instances':
      return Array.from({ length: item.count }, (_, i) =>
        showInstance(item.first + i, module!, names),
      );
    case 'always':
    case 'initial':
      return [`${item.kind} ${showStatement(item.body, names)}`];
    case 'function':
    case 'task': {
      const words = [item.kind, item.automatic ? 'automatic' : '', item.resultType];
      words.push(item.signed ? 'signed' : '', showRange(item.range, names), names.text(item.name));
      const declarations = item.declarations.flatMap((one) => showItem(one, module, names));
      const head = `${words.filter(Boolean).join(' ')};`;
      return [[head, ...declarations, showStatement(item.body, names)].join(' ')];
    }
    case 'defparam':
      return [`defparam ${showPath(item.path, names, item.indices)}=${show(item.value)};`];
    case 'generateFor': {
      const initial = `${names.text(item.genvar)}=${show(item.initial)}`;
      const step = `${names.text(item.stepName)}=${show(item.step)}`;
      return [`for(${initial};${show(item.condition)};${step}) ${block(item.body)}`];
    }
    case 'generateIf': {
      const otherwise = item.whenFalse === undefined ? '' : ` else ${block(item.whenFalse)}`;
      return [`if(${show(item.condition)}) ${block(item.whenTrue)}${otherwise}`];
    }
    case 'generateCase': {
      const branches = item.items.map((one) => showBranch(one.labels, block(one.body), names));
      return [`case(${show(item.subject)}) ${branches.join(' ')} endcase`];
    }
    case 'generateBlock':
      return [block(item.body)];
  }
}

function showBlock(
  body: GenerateBlock,
  module: ModuleSyntax | undefined,
  names: NameTable,
): string {
  const name = body.name === 0 ? '' : `:${names.text(body.name)}`;
  const inner = body.items.flatMap((item) => showItem(item, module, names));
  return [`begin${name}`, ...inner, 'end'].join(' ');
}

function showInstance(instance: number, module: ModuleSyntax, names: NameTable): string {
  const table = module.instances;
  const kind = table.module(instance);
  const extras = table.extras(instance);
  const parameters = extras?.parameters.map(({ name, value }) => {
    const text = showExpression(value, names);
    return name === 0 ? text : `.${names.text(name)}(${text})`;
  });
  const words = [
    kind < 0 ? builtinGates[-1 - kind]! : names.text(kind),
    showStrength(extras?.strength),
    parameters === undefined || parameters.length === 0 ? '' : `#(${parameters.join(',')})`,
    names.text(table.name(instance)) + showRange(extras?.range, names),
  ];
  const connections: string[] = [];
  const end = table.connectionStart(instance + 1);
  for (let c = table.connectionStart(instance); c < end; c++) {
    const port = table.connectionPort(instance, c);
    const text = showConnection(c, module, names);
    connections.push(port === POSITIONAL ? text : `.${names.text(port)}(${text})`);
  }
  const space = words.at(-1) === '' ? ' ' : '';
  return `${words.filter(Boolean).join(' ')}${space}(${connections.join(',')});`;
}

/** Bit and name connections as such; those that are expressions begin with `=`. */
function showConnection(connection: number, module: ModuleSyntax, names: NameTable): string {
  const table = module.instances;
  const first = table.connectionFirst(connection);
  switch (table.connectionKind(connection)) {
    case ConnectionKind.Empty:
      return '';
    case ConnectionKind.Name:
      return names.text(first);
    case ConnectionKind.Bit:
      return `${names.text(first)}[${table.connectionSecond(connection)}]`;
    default:
      return `=${showExpression(table.expressions[first]!, names)}`;
  }
}

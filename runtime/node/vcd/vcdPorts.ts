import type { PortLayout } from '../../layout.js';
import { columnOf, declared } from '../columns.js';
import type { VcdVariable } from './vcdHeader.js';

/** Bits of a variable that are bits of a port. */
export interface VcdPart {
  readonly id: string;
  /** Of the variable, and how many of its lowest bits count. */
  readonly width: number;
  /** Place of the lowest in the row. */
  readonly offset: number;
}

/** What drives each port, by its index; undefined for those that are not found. */
export type VcdPorts = readonly (readonly VcdPart[] | undefined)[];

/**
 * Finds the variables of ports: those of the scope that has most of them, the highest if several
 * do; then, for what that lacks, those of their name anywhere if it is clear which.
 *
 * The first `inputs` ports are data inputs, of which at least one must be found if there is any; the
 * others are clocks. Variables of one name with one code are the same wherever they stand. `scope` chooses the scope
 * instead. Returns what is wrong as a string, such as scopes that are equally good.
 */
export function findPorts(
  ports: readonly PortLayout[],
  inputs: number,
  variables: readonly VcdVariable[],
  scope?: string,
): VcdPorts | string {
  const byScope = new Map<string, VcdVariable[]>();
  for (const variable of variables) {
    const others = byScope.get(variable.scope);
    if (others) others.push(variable);
    else byScope.set(variable.scope, [variable]);
  }
  const scopes = [...byScope].map(([name, inside]) => scopeOf(name, inside, ports));
  if (scope !== undefined) return chosen(scopes, scope);
  const most = Math.max(0, ...scopes.map(({ found }) => found));
  if (most === 0) return nothing(ports);
  const best = scopes.filter(({ found }) => found === most);
  const depth = Math.min(...best.map((each) => each.depth));
  const highest = distinct(best.filter((each) => each.depth === depth));
  const [first, second] = highest;
  if (second) {
    const names = highest.map(({ name }) => name || 'the top').join(', ');
    return `the ports are in several scopes: ${names}; choose one with --stimulus-scope`;
  }
  const parts = ports.map((_, i) => first!.parts[i] ?? elsewhere(scopes, i));
  if (inputs > 0 && parts.slice(0, inputs).every((part) => part === undefined)) {
    return nothing(ports.slice(0, inputs));
  }
  const wrong = parts.find((part) => typeof part === 'string');
  return wrong ?? (parts as VcdPorts);
}

interface Scope {
  readonly name: string;
  readonly depth: number;
  readonly found: number;
  /** By index of the port; a string tells why its variables do not fit. */
  readonly parts: readonly (readonly VcdPart[] | string | undefined)[];
}

function scopeOf(
  name: string,
  variables: readonly VcdVariable[],
  ports: readonly PortLayout[],
): Scope {
  const parts = ports.map((port) => partsOf(port, variables));
  const found = parts.filter((part) => part !== undefined).length;
  return { name, depth: variables[0]!.depth, found, parts };
}

function partsOf(
  port: PortLayout,
  variables: readonly VcdVariable[],
): VcdPart[] | string | undefined {
  const own = variables.filter((variable) => isNamed(variable, port.name));
  if (own.length === 0) return undefined;
  // The last one declared counts, should there be several.
  const whole = own.findLast(({ width }) => width === port.width);
  if (whole) return [{ id: whole.id, width: port.width, offset: port.offset }];
  const parts: VcdPart[] = [];
  for (const { id, width, range } of own) {
    const wanted = `${declared(port)} has ${width} bits in the recording`;
    if (range === undefined) return wanted;
    const column = columnOf(`${port.name}${rangeText(range)}`, 0, {
      ...{ ports: [port], bits: 0, words: 0 },
    });
    if (typeof column === 'string') return column;
    if (column.width !== width) return wanted;
    parts.push({ id, width, offset: column.offset });
  }
  return parts;
}

// An escaped identifier may look like a bit of a vector.
const isNamed = ({ name, range }: VcdVariable, port: string): boolean =>
  name === port || (range !== undefined && port === `${name}${rangeText(range)}`);

const rangeText = ([left, right]: readonly [number, number]): string =>
  left === right ? `[${left}]` : `[${left}:${right}]`;

function chosen(scopes: readonly Scope[], name: string): VcdPorts | string {
  const scope = scopes.find((each) => each.name === name);
  if (scope === undefined) {
    const names = scopes.map((each) => each.name || '(top)').join(', ');
    return `scope ${name} has no port of the circuit${names && `; these have: ${names}`}`;
  }
  const wrong = scope.parts.find((part) => typeof part === 'string');
  return wrong ?? (scope.parts as VcdPorts);
}

function elsewhere(
  scopes: readonly Scope[],
  port: number,
): readonly VcdPart[] | string | undefined {
  const found = scopes.flatMap(({ parts }) => {
    const part = parts[port];
    return part === undefined ? [] : [part];
  });
  const [first] = found;
  const isClear = found.every((part) => JSON.stringify(part) === JSON.stringify(first));
  return isClear ? first : undefined;
}

function distinct(scopes: readonly Scope[]): Scope[] {
  const known = new Map(scopes.map((scope) => [JSON.stringify(scope.parts), scope]));
  return [...known.values()];
}

function nothing(ports: readonly PortLayout[]): string {
  const names = ports.map(({ name }) => name);
  return `no variable here has the name of an input: ${names.slice(0, 20).join(', ')}`;
}

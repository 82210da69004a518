/*
 * A reader of value change dumps for tests, written after the syntax in IEEE 1364-2005, clause 18.2
 * (declarations 18.2.3, value changes 18.2.1; from memory of the standard), with nothing of the
 * project's own in it. It takes no liberties: what the syntax does not allow throws.
 */

/** A variable of a dump: a reference under a scope, and the code that its values come under. */
export interface VcdVariable {
  /** Scope names and reference, joined with dots. */
  readonly name: string;
  readonly type: string;
  readonly width: number;
  readonly code: string;
  /** `[7:0]` or `[3]`; empty for none. */
  readonly range: string;
}

/** A dump as a whole. */
export interface Vcd {
  readonly timescale: string;
  readonly variables: readonly VcdVariable[];
  /** All times, ascending. */
  readonly times: readonly number[];
  /** A variable's value at a time: all its bits, most significant first. */
  valueAt(code: string, time: number): string;
}

const VARIABLE_TYPES =
  'event integer parameter real realtime reg supply0 supply1 time tri triand trior trireg tri0 tri1 wand wire wor';
const SCOPE_TYPES = ['begin', 'fork', 'function', 'module', 'task'];

/** Reads a dump. Throws an Error where it departs from the syntax. */
export function readVcd(text: string): Vcd {
  const tokens = text.split(/\s+/).filter((token) => token !== '');
  let at = 0;
  const next = (): string => tokens[at++] ?? fail('the dump ends in the middle');
  const upToEnd = (): string[] => {
    const inside: string[] = [];
    for (let token = next(); token !== '$end'; token = next()) inside.push(token);
    return inside;
  };
  const variables: VcdVariable[] = [];
  const scopes: string[] = [];
  let timescale = '';
  for (let keyword = next(); keyword !== '$enddefinitions'; keyword = next()) {
    const inside = upToEnd();
    if (keyword === '$comment' || keyword === '$date' || keyword === '$version') continue;
    if (keyword === '$timescale') {
      timescale = inside.join('');
      if (!/^(1|10|100)(s|ms|us|ns|ps|fs)$/.test(timescale)) fail(`timescale ${timescale}`);
    } else if (keyword === '$scope') {
      if (inside.length !== 2 || !SCOPE_TYPES.includes(inside[0]!)) fail(`scope ${inside}`);
      scopes.push(nameOf(inside[1]!));
    } else if (keyword === '$upscope') {
      if (inside.length > 0 || scopes.pop() === undefined) fail('upscope');
    } else if (keyword === '$var') variables.push(variableOf(inside, scopes));
    else fail(`declaration ${keyword}`);
  }
  if (upToEnd().length > 0 || scopes.length > 0) fail('the end of the definitions');
  if (timescale === '') fail('no timescale');
  return { timescale, variables, ...changesOf(tokens.slice(at), variables) };
}

function variableOf(inside: readonly string[], scopes: readonly string[]): VcdVariable {
  const [type, size, code, reference, range = ''] = inside;
  if (inside.length < 4 || inside.length > 5) fail(`var ${inside.join(' ')}`);
  if (!VARIABLE_TYPES.split(' ').includes(type!)) fail(`type ${type}`);
  const width = Number(size);
  if (!/^\d+$/.test(size!) || width < 1) fail(`size ${size}`);
  if (!/^[!-~]+$/.test(code!)) fail(`code ${code}`);
  const [, msb, lsb] = /^\[(-?\d+)(?::(-?\d+))?\]$/.exec(range) ?? [];
  if (range !== '' && msb === undefined) fail(`range ${range}`);
  const bits = lsb === undefined ? 1 : Math.abs(Number(msb) - Number(lsb)) + 1;
  if (bits !== width) fail(`${reference} has ${width} bits and the range ${range}`);
  const name = [...scopes, nameOf(reference!)].join('.');
  return { name, type: type!, width, code: code!, range };
}

// An escaped identifier begins with a backslash (3.7.1); an index of an instance may follow others.
function nameOf(word: string): string {
  if (word.startsWith('\\')) return word.slice(1);
  return /^[A-Za-z_][\w$]*(\[-?\d+\])*$/.test(word) ? word : fail(`identifier ${word}`);
}

function changesOf(tokens: readonly string[], variables: readonly VcdVariable[]) {
  const widths = new Map(variables.map(({ code, width }) => [code, width]));
  const changes = new Map<string, { time: number; value: string }[]>();
  const times: number[] = [];
  let isDump = false;
  for (let i = 0; i < tokens.length; i++) {
    const token = tokens[i]!;
    if (token.startsWith('#')) {
      const time = Number(token.slice(1));
      if (!/^#\d+$/.test(token) || time <= (times.at(-1) ?? -1)) fail(`time ${token}`);
      times.push(time);
    } else if (token === '$dumpvars') isDump = true;
    else if (token === '$end' && isDump) isDump = false;
    else {
      const [value, code] = /^[bB]/.test(token)
        ? [token.slice(1), tokens[++i]]
        : [token[0]!, token.slice(1)];
      const width = widths.get(code ?? '') ?? fail(`no variable has the code of ${token} ${code}`);
      if (!/^[01xXzZ]+$/.test(value) || value.length > width) fail(`value ${token}`);
      if (width > 1 && !/^[bB]/.test(token)) fail(`${token} is no vector`);
      if (times.length === 0) fail('a value before the first time');
      const list = changes.get(code!) ?? [];
      if (!isDump && list.length === 0) fail(`${code} has no value at first`);
      changes.set(code!, [...list, { time: times.at(-1)!, value: extended(value, width) }]);
    }
  }
  if (isDump) fail('$dumpvars has no $end');
  const valueAt = (code: string, time: number): string =>
    changes.get(code)?.findLast((change) => change.time <= time)?.value ?? fail(`${code} ${time}`);
  return { times, valueAt };
}

// Table 18-1: the leftmost digit is repeated if it is x or z, else 0 is put in front.
const extended = (value: string, width: number): string =>
  value.padStart(width, /[xz]/i.test(value[0]!) ? value[0]! : '0').toLowerCase();

function fail(what: string): never {
  throw new Error(`not as in clause 18: ${what}`);
}

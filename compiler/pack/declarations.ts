import type { LaneCount } from '../../runtime/laneLayout.js';
import type { ModelLayout, PortLayout } from '../../runtime/layout.js';
import type { KeptMemory, KeptNet } from '../../runtime/model/description.js';
import { rangesOf } from './keptMemories.js';
import { declaredName } from './keptNets.js';
import { laneTypes } from './types/lanes.js';
import { modelTypes } from './types/single.js';

/** Kept nets beyond this number are not written out as types. */
const MOST_NETS = 1000;

/** How many sequences a package runs, and whether one may come to a cycle without result. */
export interface LaneFacts {
  readonly lanes: 1 | LaneCount;
  readonly mayEnd: boolean;
}

/** The text of `model.d.ts`: the interface of the package with the netlist's own names. */
export function declarations(
  layout: ModelLayout,
  nets: readonly KeptNet[],
  memories: readonly KeptMemory[],
  { lanes, mayEnd }: LaneFacts,
): string {
  const { name, threeValued, inputs, outputs, clocks } = layout;
  const isOfObjects = [...inputs.ports, ...outputs.ports].some((port) => port.name in {});
  const some = isOfObjects ? SOME : 'Partial';
  const kinds = { threeValued, some };
  return `/**
 * ${comment(name)}, a clocked circuit as a module. Values are numbers up to 32 bits and bigints above${
   threeValued
     ? ';\n * where a bit is x (unknown) they are the text `x` or, for several bits, `0b…`'
     : ''
 }.
 */

${ports('Inputs', 'What goes in. All are 0 at power-up.', inputs.ports, threeValued)}

${ports('Outputs', 'What comes out.', outputs.ports, threeValued)}

/** Every port by name. */
export type Ports = Inputs & Outputs;

${netTypes(nets, memories, threeValued)}

/** Clocks tick by themselves, once in each cycle: ${comment(clocks.join(', ') || 'there is none')}. */
export type Clock = ${clocks.map((clock) => JSON.stringify(clock)).join(' | ') || 'never'};

${some === SOME ? SOME_TYPE : ''}${lanes === 1 ? modelTypes(kinds) : laneTypes(kinds, lanes, mayEnd)}`;
}

function ports(
  type: string,
  purpose: string,
  rows: readonly PortLayout[],
  threeValued: boolean,
): string {
  const lines = rows.map(
    ({ name, width, msb, lsb, isVector }) =>
      `  /** ${isVector ? `[${msb}:${lsb}], ${bits(width)}` : '1 bit'} */\n` +
      `  ${JSON.stringify(name)}: ${valueType(width, threeValued)};`,
  );
  return `/** ${purpose} */\nexport interface ${type} {\n${lines.join('\n')}${lines.length ? '\n' : ''}}`;
}

function netTypes(
  nets: readonly KeptNet[],
  memories: readonly KeptMemory[],
  threeValued: boolean,
): string {
  const head =
    '/** State, kept nets and words of memories, by full name, for `peek`. */\n' +
    'export interface Nets {\n';
  if (nets.length > MOST_NETS) {
    return `${head}  [name: string]: ${valueType(1, threeValued)} | ${valueType(33, threeValued)};\n}`;
  }
  const lines = nets.map(
    (net) =>
      `  /** ${comment(declaredName(net))} */\n` +
      `  ${JSON.stringify(net.name)}: ${valueType(net.width, threeValued)};\n`,
  );
  const words = memories.map(
    ({ name, width, indices }) =>
      `  /** ${comment(name)}: ${bits(width)} in a word, ${comment(rangesOf(indices))} */\n` +
      `  [word: ${wordPattern(name, indices.length)}]: ${valueType(width, threeValued)};\n`,
  );
  return `${head}${lines.join('')}${words.join('')}}`;
}

/** The type of the names of a memory's words. */
function wordPattern(name: string, indices: number): string {
  const text = name.replace(/[\\`]|\$(?=\{)/g, '\\$&');
  return `\`${text}${['[$', '{number}]'].join('').repeat(indices)}\``;
}

function valueType(width: number, threeValued: boolean): string {
  const known = width <= 32 ? 'number' : 'bigint';
  if (!threeValued) return known;
  return `${known} | ${width === 1 ? "'x'" : TEXT_TYPE}`;
}

// The type of texts such as 0b10x1.
const TEXT_TYPE = ['`0b', '{string}`'].join('$');

const SOME = 'Some';

// Every object has members of these names, which `Partial` would hold against it.
const SOME_TYPE = `/** Some of the values; a port may be called as a member that all objects have. */
export type Some<Values> = {
  readonly [Name in keyof Values]?:
    | Values[Name]
    | (Name extends keyof Object ? Object[Name] : never);
};

`;

const bits = (width: number): string => (width === 1 ? '1 bit' : `${width} bits`);

// Names may hold anything, in escaped identifiers.
const comment = (text: string): string => text.replaceAll('*/', '* /');

import type { ModelLayout, PortLayout } from '../../runtime/layout.js';
import type { KeptMemory, KeptNet } from '../../runtime/model/description.js';
import { key, quoted } from './example.js';
import { rangesOf } from './keptMemories.js';
import { declaredName, type KeepNames } from './keptNets.js';
import type { ResetPort } from './resets.js';

/** What the README of a package tells of. */
export interface ReadmeFacts {
  readonly layout: ModelLayout;
  readonly lanes: number;
  readonly resets: readonly ResetPort[];
  readonly nets: readonly KeptNet[];
  readonly memories: readonly KeptMemory[];
  readonly keepNames: KeepNames;
  /** Clocks with a pace of their own. */
  readonly paces: readonly string[];
  /** Text and output of `example.mjs`. */
  readonly example: string;
  readonly printed: string;
  /** Name to import the package by, if it has one. */
  readonly npmName: string | undefined;
}

const MOST_NETS = 40;

/** The README of a package, for someone who has never seen a netlist. */
export function readmeText(facts: ReadmeFacts): string {
  const { layout, npmName, example, printed } = facts;
  return `# ${layout.name}

A clocked circuit as a JavaScript module: write its inputs, let its clock tick, read its outputs.
It is the netlist itself, compiled to WebAssembly, exact cycle by cycle and bit by bit; it has no
dependencies and fetches nothing but the \`model.wasm\` beside it. No knowledge of circuits is needed
beyond this page.

${npmName === undefined ? '' : `    npm install PATH/TO/THIS/FOLDER\n\n`}## Start

\`example.mjs\` is this text; \`node example.mjs\` runs it.

\`\`\`js
${example}\`\`\`

It prints

\`\`\`
${printed}\`\`\`

In a page, \`<script type="module">\` and \`import { load } from './model.mjs'\`, with the way from the
page to this folder, do${npmName === undefined ? '' : `; with a bundler, and in Node, \`import { load } from '${npmName}'\``}. In TypeScript the ports have their types.

${portSections(facts)}
## What you can do

${facts.lanes === 1 ? singleCalls(layout) : laneCalls(layout, facts.lanes)}

The model is always settled: outputs that depend on inputs directly change with \`write\`, registers
change with \`step\`. What \`read\` shows is what row k of a response would hold in the next cycle.
Misuse throws \`RangeError\` or \`TypeError\` and says what was expected and what came; a cycle that has
no result, as where a loop of gates never settles, ${facts.lanes === 1 ? 'throws `RunFault`' : 'ends its lane'}.

In typed arrays a port of up to 32 bits has one entry for each cycle, a wider one as many 32-bit
entries as it takes, the least significant first.${facts.lanes === 1 ? ' `runUntil` returns `{ met, cycles }`.' : ''} \`powerUp\` is ${powerUps(layout, facts.memories)}.
${layout.threeValued ? UNKNOWN : ''}
A saved state fits every package made of the same netlist, of one sequence or of many, and is
refused by others.

## Where it runs

- Pages, workers, Node 20 and later, and other runtimes with WebAssembly (with its 128-bit vectors).
- Under a strict content security policy: \`script-src 'self' 'wasm-unsafe-eval'; connect-src 'self'\`
  (and \`worker-src 'self'\` for ${facts.lanes === 1 ? '`loadInWorker`' : 'a worker'}). Nothing is evaluated from text.
- Bundlers that know \`new URL('./model.wasm', import.meta.url)\` need no setting. For others copy
  \`model.wasm\`${facts.lanes === 1 ? ' (and `worker.mjs`, `model.mjs` for workers)' : ''} beside the bundle, or pass its address:
  \`load(address)\`.
- A server should send \`model.wasm\` as \`application/wasm\`: it is then compiled while it arrives.

## What it says, and what not

Zero-delay, cycle-accurate: the model says nothing about timing and is no sign-off. Where people
rely on a circuit, local codes, the applicable functional-safety standard and qualified review
decide. \`manifest.json\` has the hashes of the sources and of all files, the options, and what was
compared with a reference interpreter before this package was written.
`;
}

const UNKNOWN = `
A bit may be unknown, x: all registers that the netlist gives no value are at power-up. A value with
x in it is a text: \`'x'\` for one bit, else \`'0b'\` and all bits, the most significant first, such as
\`'0b10x1'\`. Inputs take such texts too. Blocks have x in columns of their own: \`unknown\` has a 1
for each bit that is x.
`;

function portSections({ layout, resets, nets, memories, keepNames, paces }: ReadmeFacts): string {
  const { inputs, outputs, clocks } = layout;
  const clock =
    paces.length > 0 ? paces.join(', ') : clocks.map((name) => `\`${name}\``).join(', ');
  return `## Ports

${portTable('input', inputs.ports, (name) => resetNote(resets, name))}
${portTable('output', outputs.ports, () => '')}
${
  clocks.length === 0
    ? 'There is no clock: outputs follow inputs at once.'
    : `Clock: ${clock}. It ticks by itself, once in each cycle, and is never written.`
} ${resetText(resets)}

${netText(nets, keepNames)}
${memoryText(memories)}`;
}

function portTable(
  kind: string,
  ports: readonly PortLayout[],
  note: (name: string) => string,
): string {
  if (ports.length === 0) return `There is no ${kind}.\n`;
  const rows = ports.map(({ name, width, msb, lsb, isVector }) => {
    const range = isVector ? `${width} [${msb}:${lsb}]` : `${width}`;
    return `| \`${cell(name)}\` | ${range} | ${width <= 32 ? 'number' : 'bigint'} | ${note(name)} |`;
  });
  return `| ${kind} | bits | type | |\n|---|---|---|---|\n${rows.join('\n')}\n`;
}

const resetNote = (resets: readonly ResetPort[], name: string): string => {
  const reset = resets.find((each) => each.name === name);
  return reset ? `reset, acts at ${reset.active} without waiting for the clock` : '';
};

function resetText(resets: readonly ResetPort[]): string {
  if (resets.length === 0) {
    return 'No input resets registers directly; `model.reset()` goes back to power-up.';
  }
  const names = resets.map(({ name, active }) => `\`${key(name)}: ${active}\``).join(', ');
  return `Registers are set to their first values by ${names}; \`model.reset()\` goes back to power-up.`;
}

function netText(nets: readonly KeptNet[], keepNames: KeepNames): string {
  const kept = { ports: 'registers', all: 'registers and all named nets' };
  const what = typeof keepNames === 'string' ? kept[keepNames] : 'registers and chosen nets';
  if (nets.length === 0) return 'There is no state to look at.';
  const shown = nets.slice(0, MOST_NETS).map((net) => `\`${cell(declaredName(net))}\``);
  const rest = nets.length - shown.length;
  return `\`peek\` shows ${what} (${nets.length}), by these names without the range: ${shown.join(', ')}${
    rest > 0 ? `, and ${rest} more in \`model.nets\`` : ''
  }.`;
}

function memoryText(memories: readonly KeptMemory[]): string {
  const [first] = memories;
  if (first === undefined) return '';
  const list = memories.map(
    ({ name, width, indices }) =>
      `\`${cell(name)}\` (${width} bits in a word, ${rangesOf(indices)})`,
  );
  const word = `${first.name}${first.indices.map(({ low }) => `[${low}]`).join('')}`;
  return `
Memories: ${list.join(', ')}. \`model.peek(${quoted(word)})\` shows a word; \`reset\` gives them their
first contents again, and a saved state has them all.
`;
}

const cell = (name: string): string => name.replaceAll('|', '\\|').replaceAll('`', "'");

function powerUps({ threeValued }: ModelLayout, memories: readonly KeptMemory[]): string {
  const usual = threeValued ? "`'unknown'`" : "`'zero'`";
  if (memories.length > 0) return `${usual}, since there are memories`;
  const ways = ["`'zero'`", "`'one'`", "`'random'`", ...(threeValued ? [usual] : [])];
  return `${ways.join(', ')}; ${usual} unless given`;
}

const sampleInput = ({ inputs }: ModelLayout): string => {
  const port = inputs.ports[0];
  return port === undefined ? '' : `${key(port.name)}: ${port.width <= 32 ? '1' : '1n'}`;
};

const sampleOutput = ({ outputs }: ModelLayout): string => key(outputs.ports[0]?.name ?? 'name');

const singleCalls = (layout: ModelLayout): string => `| call | what it does |
|---|---|
| \`await load()\` | loads the model; each call makes an instance of its own |
| \`load(source, options)\` | from an address, bytes, a response or \`await compile()\`; \`load(undefined, { verify: true })\` checks the hash, \`powerUp\` and \`seed\` say how registers start |
| \`model.write({ ${sampleInput(layout)} })\` | gives inputs new values, the others keep theirs |
| \`model.read()\`, \`model.read('${sampleOutput(layout)}')\` | all outputs, or one port |
| \`model.step(n)\` | lets n cycles pass (1 unless given) |
| \`model.run({ cycles, stimulus, response })\` | many cycles on typed arrays, one column a port |
| \`model.runUntil({ ${sampleOutput(layout)}: … }, limit)\` | runs until outputs have these values, or a function says so |
| \`model.peek(name)\` | looks at a register, a kept net or a word of a memory inside |
| \`model.save()\`, \`model.restore(saved)\` | the whole state as plain data for JSON, and back |
| \`model.reset()\` | back to power-up |
| \`model.subscribe(listener, names)\` | tells which ports changed, after each call that changed some |
| \`model.dispose()\` | lets go of everything |
| \`await loadInWorker()\` | the same in a worker: a promise for each answer, \`{ onProgress, signal }\` for long calls |`;

const laneCalls = (
  layout: ModelLayout,
  lanes: number,
): string => `${lanes} independent sequences run side by side, lanes 0 to ${lanes - 1}: their clock ticks together, their
inputs and states are their own. Where a lane is left out, all of them are meant.

| call | what it does |
|---|---|
| \`await load()\` | loads the model; each call makes an instance of its own |
| \`load(source, options)\` | from an address, bytes, a response or \`await compile()\`; \`load(undefined, { verify: true })\` checks the hash, \`powerUp\` and \`seed\` say how registers start: lane l at random as seed + l says |
| \`model.write({ ${sampleInput(layout)} }, 5)\` | gives inputs of lane 5 new values, the others keep theirs; without the lane, those of all lanes |
| \`model.read('${sampleOutput(layout)}', 5)\`, \`model.read(5)\` | a port of lane 5, or all its outputs |
| \`model.read('${sampleOutput(layout)}')\`, \`model.read()\` | the same of all lanes, a list with a value for each |
| \`model.step(n)\` | lets n cycles pass (1 unless given) |
| \`model.run({ cycles, stimulus, response })\` | many cycles on typed arrays: for each input one column for all lanes or a list with one for each, for each output a list of columns |
| \`model.runUntil({ ${sampleOutput(layout)}: … }, limit)\` | runs until outputs have had these values in each lane; \`first\` tells when |
| \`model.peek(name, 5)\` | looks at a register or a kept net inside |
| \`model.save(5)\`, \`model.restore(saved, 5)\` | the whole state of a lane as plain data for JSON, and back |
| \`model.reset(5)\` | back to power-up |
| \`model.faults\` | lanes that have ended because a cycle has no result; the others go on |
| \`model.dispose()\` | lets go of everything |`;

import type { Circuit } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { declaredIndex, type Signal } from '../../circuit/hierarchy.js';
import type { ByteText } from '../byteText.js';
import { scopesOf } from '../scopeTree.js';
import { type SignalList, signalAt } from '../signalList.js';
import type { Waves } from '../waves.js';

/**
 * The declarations of a value change dump (IEEE 1364-2005, 18.2.3): a scope for each instance that
 * has a signal in the list or leads to one, a variable for each signal.
 */
export function* declarations(
  circuit: Circuit,
  list: SignalList,
  waves: Waves,
  text: ByteText,
): Generator<Uint8Array, void, undefined> {
  const { hierarchy } = circuit;
  const scopes = scopesOf(hierarchy, list);
  // Scopes that are entered and left, the next one last; left ones are inverted.
  const agenda = [0];
  for (let scope = agenda.pop(); scope !== undefined; scope = agenda.pop()) {
    if (scope < 0) {
      text.text('$upscope $end\n');
      continue;
    }
    text.text(`$scope module ${scopeWord(hierarchy.scopeNames.at(scope)!)} $end\n`);
    for (const entry of scopes.entries(scope)) {
      text.text(variable(circuit, list, entry, waves.ofSignal[entry]!));
      if (text.isPiece) yield text.take();
    }
    agenda.push(~scope, ...scopes.children(scope));
    if (text.isPiece) yield text.take();
  }
  text.text('$enddefinitions $end\n');
}

/** The short name of a wave: digits of base 94, from `!` to `~`. */
export function waveCode(wave: number): string {
  let code = '';
  for (let rest = wave + 1; rest > 0; rest = Math.floor((rest - 1) / 94)) {
    code += String.fromCharCode(33 + ((rest - 1) % 94));
  }
  return code;
}

function variable(circuit: Circuit, list: SignalList, entry: number, wave: number): string {
  const signal = signalAt(circuit.hierarchy, list.scope[entry]!, list.signal[entry]!);
  const width = list.width[entry]!;
  const kind = isRegister(circuit, list, entry) ? 'reg' : 'wire';
  const range = rangeText(signal, list.low[entry]!, width);
  return `$var ${kind} ${width} ${waveCode(wave)} ${word(signal.name)}${range} $end\n`;
}

function isRegister({ kind }: Circuit, { place, width, nets }: SignalList, entry: number): boolean {
  const start = place[entry]!;
  return nets
    .subarray(start, start + width[entry]!)
    .every((net) => kind[net] === GateKind.Register);
}

function rangeText(signal: Signal, low: number, width: number): string {
  if (!signal.isVector) return '';
  const right = declaredIndex(signal, low);
  if (width === 1 && signal.width > 1) return ` [${right}]`;
  return ` [${declaredIndex(signal, low + width - 1)}:${right}]`;
}

// A name that is no simple identifier is an escaped one (3.7.1); white space ends it.
const word = (name: string): string => (/^[A-Za-z_][\w$]*$/.test(name) ? name : `\\${name}`);

// Instances of generated blocks and of arrays have an index, which is no part of their identifier.
const scopeWord = (name: string): string =>
  /^[A-Za-z_][\w$]*(\[-?\d+\])+$/.test(name) ? name : word(name);

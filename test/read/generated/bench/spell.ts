import { GateKind } from '../../../../compiler/circuit/gates.js';
import { Choices, type SpellingRecipe } from '../spell/choices.js';
import { type BenchRecipe, netsOf, outputsOf } from './recipe.js';

const words: Partial<Record<GateKind, readonly string[]>> = {
  [GateKind.And]: ['AND'],
  [GateKind.Nand]: ['NAND'],
  [GateKind.Or]: ['OR'],
  [GateKind.Nor]: ['NOR'],
  [GateKind.Xor]: ['XOR'],
  [GateKind.Xnor]: ['XNOR'],
  [GateKind.Not]: ['NOT', 'INV'],
  [GateKind.Buf]: ['BUFF', 'BUF'],
  [GateKind.Register]: ['DFF'],
  [GateKind.Zero]: ['CONST0', 'GND'],
  [GateKind.One]: ['CONST1', 'VDD'],
};

/** Writes a circuit in the ISCAS'89 text form, in one of its spellings. */
export function spellBench(recipe: BenchRecipe, spelling: SpellingRecipe): string {
  const choices = new Choices(spelling);
  const nets = netsOf(recipe);
  const cased = (word: string): string =>
    choices.of('styles', [word, word.toLowerCase(), word[0] + word.slice(1).toLowerCase()]);
  const ports: string[][] = [];
  const gates: string[][] = [];
  for (const { name, kind, inputs } of nets) {
    if (kind === GateKind.Input) {
      ports.push([cased('INPUT'), '(', name, ')']);
      continue;
    }
    const reads = inputs.flatMap((input, i) => [...(i === 0 ? [] : [',']), nets[input]!.name]);
    const word = cased(choices.of('styles', words[kind]!));
    const isBare = inputs.length === 0 && choices.pick('styles', 2) === 1;
    gates.push([name, '=', word, ...(isBare ? [] : ['(', ...reads, ')'])]);
  }
  for (const { name } of outputsOf(recipe, nets)) ports.push([cased('OUTPUT'), '(', name, ')']);
  // The order of ports counts, that of all else does not.
  const order = choices.pick('files', 2) === 1 ? gates.toReversed() : gates;
  const half = choices.pick('files', 1 + ports.length);
  const statements =
    choices.pick('files', 2) === 1
      ? [...ports.slice(0, half), ...order, ...ports.slice(half)]
      : [...ports, ...order];
  const ends = choices.of('trivia', ['\n', '\r\n', '\n# and ( so, on =\n', '\n\n', ' ']);
  return statements.map((tokens) => spaced(tokens, choices)).join(ends);
}

function spaced(tokens: readonly string[], choices: Choices): string {
  let text = '';
  for (const token of tokens) {
    const mayTouch = /^[(),=]$/.test(token) || /[(),=]$/.test(text) || text === '';
    const blank = choices.of('trivia', [' ', '\t', '  ', '\n', ' # x\n']);
    text += (mayTouch && choices.pick('trivia', 3) < 2 ? '' : blank) + token;
  }
  return text;
}

import type { ModelLayout, PortLayout } from '../../runtime/layout.js';
import type { ResetPort } from './resets.js';

const SHOWN_OUTPUTS = 6;
const SHOWN_INPUTS = 4;

/** The text of `example.mjs`, a first use of the model that runs as it stands. */
export function exampleText(
  layout: ModelLayout,
  resets: readonly ResetPort[],
  lanes: number,
): string {
  const driven = layout.inputs.ports.filter(({ name }) => resets.every((r) => r.name !== name));
  const shown = layout.outputs.ports.slice(0, SHOWN_OUTPUTS);
  const lines = [
    `// A first use of ${layout.name}: node example.mjs`,
    "import { load, valueText } from './model.mjs';",
    '',
    'const model = await load();',
    ...resetLines(resets),
    ...(lanes === 1 ? useLines(driven, shown) : laneLines(driven, shown)),
  ];
  return `${lines.join('\n')}\n`;
}

function useLines(driven: readonly PortLayout[], shown: readonly PortLayout[]): string[] {
  return [
    ...writeLines(driven.slice(0, SHOWN_INPUTS), 1),
    '// Outputs follow the inputs at once; registers wait for the clock.',
    "show('outputs in cycle');",
    'model.step(10);',
    "show('ten cycles later, in cycle');",
    ...blockLines(driven[0], shown[0]),
    '',
    'function show(when) {',
    '  console.log(when, model.cycle);',
    `  for (const { name, width } of model.outputs.slice(0, ${shown.length})) {`,
    "    console.log(' ', name, '=', valueText(model.read(name), width));",
    '  }',
    '}',
  ];
}

function laneLines(driven: readonly PortLayout[], shown: readonly PortLayout[]): string[] {
  const other = writeLines(driven.slice(0, 1), 0).map((line) => line.replace(');', ', 1);'));
  return [
    '// What is written without a lane goes to all of them.',
    ...writeLines(driven.slice(0, SHOWN_INPUTS), 1),
    ...(other.length > 0 ? ['// Lane 1 is to differ.', ...other] : []),
    '// Outputs follow the inputs at once; registers wait for the clock, which all lanes share.',
    'model.step(10);',
    `for (const { name, width } of model.outputs.slice(0, ${shown.length})) {`,
    '  const values = [0, 1].map((lane) => valueText(model.read(name, lane), width));',
    "  console.log('cycle', model.cycle, name, '=', values.join(', '));",
    '}',
    ...blockLines(driven[0], shown[0]).map((line) => line.replace('.join(', '[1].join(')),
  ];
}

function resetLines(resets: readonly ResetPort[]): string[] {
  if (resets.length === 0) return [];
  const values = (isActive: boolean): string =>
    resets.map(({ name, active }) => `${key(name)}: ${isActive ? active : 1 - active}`).join(', ');
  return [
    '// Reset for two cycles, then let go.',
    `model.write({ ${values(true)} }).step(2).write({ ${values(false)} });`,
  ];
}

function writeLines(ports: readonly PortLayout[], value: 0 | 1): string[] {
  if (ports.length === 0) return [];
  const values = ports.map(
    ({ name, width }) => `${key(name)}: ${width > 32 ? `${value * 5}n` : value}`,
  );
  return [`model.write({ ${values.join(', ')} });`];
}

function blockLines(input: PortLayout | undefined, output: PortLayout | undefined): string[] {
  if (output === undefined) return [];
  const stimulus =
    input !== undefined && input.width <= 32
      ? [`  stimulus: { ${key(input.name)}: Uint32Array.of(0, 1, 0, 1) },`]
      : [];
  return [
    '',
    '// Many cycles at once go by typed arrays: entry k is what the output was in cycle k.',
    'const { response } = model.run({',
    '  cycles: 4,',
    ...stimulus,
    `  response: [${quoted(output.name)}],`,
    '});',
    `console.log(response[${quoted(output.name)}].join(' '));`,
  ];
}

/** A name as a text in JavaScript. */
export const quoted = (name: string): string =>
  `'${name.replaceAll('\\', '\\\\').replaceAll("'", "\\'")}'`;

/** A name as a property in an object literal, where `__proto__` alone would be something else. */
export function key(name: string): string {
  if (name === '__proto__') return "['__proto__']";
  return /^[A-Za-z_$][\w$]*$/.test(name) ? name : quoted(name);
}

import type { PortLayout } from '../layout.js';
import { valueText } from '../model/nets.js';
import type { Value } from '../model/values.js';
import type { Session } from './session.js';

/** The recorded response as `clockstride run --response` writes it. */
export function responseCsv({ model, recording }: Session): string {
  const lines = [['cycle', ...model.outputs.map(({ name }) => quoted(name))].join(',')];
  for (let cycle = recording.first; cycle < recording.end; cycle++) {
    const values = model.outputs.map((port) =>
      valueText(recording.value(port, false, cycle), port.width),
    );
    lines.push([cycle, ...values].join(','));
  }
  return `${lines.join('\n')}\n`;
}

const quoted = (text: string): string =>
  /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;

/** Time units of a cycle; the clocks become active in its middle. */
const PERIOD = 10;

/**
 * The recorded cycles as a value change dump (IEEE 1364-2005, clause 18): ports, with the inputs of
 * a cycle at its start and what the outputs settle to, and the clocks.
 */
export function valueChangeDump({ model, recording, about }: Session): string {
  const ports = [
    ...model.inputs.map((port) => ({ port, isInput: true })),
    ...model.outputs.map((port) => ({ port, isInput: false })),
  ];
  const clocks = model.clocks.map((name, i) => ({ name, code: codeOf(ports.length + i) }));
  const lines = [
    `$version clockstride ${about.version} $end`,
    '$timescale 1 ns $end',
    `$scope module ${model.name} $end`,
    ...clocks.map(({ name, code }) => `$var wire 1 ${code} ${name} $end`),
    ...ports.map(({ port }, i) => variable(port, codeOf(i))),
    '$upscope $end',
    '$enddefinitions $end',
  ];
  const last: (Value | undefined)[] = ports.map(() => undefined);
  for (let cycle = recording.first; cycle < recording.end; cycle++) {
    lines.push(`#${cycle * PERIOD}`, ...clocks.map(({ code }) => `0${code}`));
    for (const [i, { port, isInput }] of ports.entries()) {
      const value = recording.value(port, isInput, cycle);
      if (value === last[i]) continue;
      last[i] = value;
      lines.push(change(value, port.width, codeOf(i)));
    }
    if (clocks.length > 0) {
      lines.push(`#${cycle * PERIOD + PERIOD / 2}`, ...clocks.map(({ code }) => `1${code}`));
    }
  }
  lines.push(`#${recording.end * PERIOD}`);
  return `${lines.join('\n')}\n`;
}

const variable = ({ name, width, msb, lsb, isVector }: PortLayout, code: string): string =>
  `$var wire ${width} ${code} ${name.replaceAll(/\s/g, '_')}${isVector ? ` [${msb}:${lsb}]` : ''} $end`;

function change(value: Value, width: number, code: string): string {
  if (width === 1) return `${value}${code}`;
  const digits = typeof value === 'string' ? value.slice(2) : value.toString(2);
  return `b${digits} ${code}`;
}

// Printable characters, as the clause allows.
function codeOf(index: number): string {
  let code = '';
  for (let rest = index; ; rest = Math.floor(rest / 94) - 1) {
    code += String.fromCharCode(33 + (rest % 94));
    if (rest < 94) return code;
  }
}

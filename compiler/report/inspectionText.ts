import type { Inspection } from './inspection.js';

/** An inspection as a page of text. */
export function inspectionText(inspection: Inspection): string {
  const { top, inputs, outputs, clocks, gates, registers, latches, loops, depth } = inspection;
  const kinds = Object.entries(inspection.gatesByKind)
    .sort(([, p], [, q]) => q - p)
    .map(([kind, count]) => `${count} ${kind}`);
  const rows: [string, string][] = [
    ['inputs', portList(inputs)],
    ['outputs', portList(outputs)],
    [
      'clocks',
      clocks.map(({ port, registers: count }) => `${port} (${count} registers)`).join(', ') ||
        'none',
    ],
    ['gates', kinds.length > 0 ? `${gates}: ${kinds.join(', ')}` : '0'],
    ['registers', String(registers)],
    ['latches', String(latches)],
    ['loops', String(loops)],
    ['depth', `${depth} levels of gates`],
  ];
  const lines = rows.map(([label, text]) => `  ${label.padEnd(10)} ${text}`);
  return [top, ...lines, ...problemLines(inspection)].join('\n');
}

function portList(ports: Inspection['inputs']): string {
  if (ports.length === 0) return 'none';
  const bits = ports.reduce((sum, port) => sum + port.width, 0);
  const shown = ports.slice(0, 12).map(({ name, width }) => (width > 1 ? `${name}:${width}` : name));
  const rest = ports.length > shown.length ? `, and ${ports.length - shown.length} more` : '';
  return `${ports.length} (${bits} bits): ${shown.join(', ')}${rest}`;
}

function problemLines({ problems }: Inspection): string[] {
  if (problems.length === 0) return ['  problems   none found'];
  const lines = problems.map(({ severity, code, message, file, line, column }) => {
    const place = file === undefined ? '' : `${file}:${line}:${column}: `;
    return `    ${place}${severity}: ${message} [${code}]`;
  });
  return [`  problems   ${problems.length}`, ...lines];
}

import type { Signal } from '../../../circuit/hierarchy.js';
import type { NameId } from '../../names.js';
import { Children } from './children.js';
import { Recording } from './recording.js';
import { Flag } from './symbols.js';
import { Drive, type Template, type TemplatePort } from './template.js';

/** A port of a black box. */
export interface BoxPort {
  readonly name: NameId;
  readonly text: string;
  /** `Flag.Inout` also where the direction is open. */
  readonly direction: number;
  readonly width: number;
  readonly range: TemplatePort['range'];
}

/**
 * The template of a black box: a boundary with nothing behind it. A port of open direction drives
 * where nothing else does.
 */
export function boxTemplate(
  name: string,
  boxPorts: readonly BoxPort[],
  hasPortOrder: boolean,
): Template {
  const ports: TemplatePort[] = [];
  const signals: Signal[] = [];
  const drives: number[] = [];
  const reads: number[] = [];
  for (const { name: portName, text, direction, width, range } of boxPorts) {
    const offset = drives.length;
    const { msb, lsb } = range ?? { msb: width - 1, lsb: 0 };
    ports.push({ name: portName, direction, offset, width, range });
    signals.push({ name: text, msb, lsb, isVector: range !== undefined, offset, width });
    for (let bit = 0; bit < width; bit++) {
      drives.push(driveOf(direction));
      reads.push(direction === Flag.Output ? 0 : 1);
    }
  }
  const bits = drives.length;
  const recording = new Recording();
  recording.declare(bits);
  const boundary = Uint32Array.from(drives, (_, place) => place);
  const names = { name, signals, bits };
  return {
    name,
    isBox: true,
    isCell: false,
    recording,
    children: new Children(),
    canonical: undefined,
    unused: undefined,
    ports,
    portOfName: new Map(ports.map((port, place) => [port.name, place])),
    hasPortOrder,
    boundary,
    drives: Uint8Array.from(drives),
    reads: Uint8Array.from(reads),
    repeats: [],
    blocks: [{ name, parent: 0, names, nets: boundary }],
    scope: undefined,
    driveOf: (net) => drives[net] ?? Drive.None,
    readsNet: (net) => reads[net] === 1,
  };
}

function driveOf(direction: number): number {
  if (direction === Flag.Output) return Drive.Full;
  return direction === Flag.Input ? Drive.None : Drive.Weak;
}

import { type BitCopy, joinedCopies } from '../../runtime/bitCopies.js';
import type { ModelLayout, PortLayout, RowLayout } from '../../runtime/layout.js';

/** How the ports of one circuit are those of another, by name. */
export interface PortMatch {
  /** From a row of inputs of the first to one of the second. */
  readonly inputs: readonly BitCopy[];
  /** From a row of outputs of the second to one of the first. */
  readonly outputs: readonly BitCopy[];
  /** The outputs that both have, as the first has them. */
  readonly common: readonly PortLayout[];
  /** In what the ports differ, one text for each. */
  readonly differences: readonly string[];
  /** Whether the same stimulus can run both, and outputs are there to compare. */
  readonly isUsable: boolean;
}

/** Matches the ports of two circuits by name. */
export function matchPorts(first: ModelLayout, second: ModelLayout): PortMatch {
  const inputs = matchRows('input', first.inputs, second.inputs);
  const outputs = matchRows('output', first.outputs, second.outputs);
  const clocks = [
    ...only('clock', first.clocks, second.clocks, 'second'),
    ...only('clock', second.clocks, first.clocks, 'first'),
  ];
  return {
    inputs: joinedCopies(inputs.pairs.map(([a, b]) => copyOf(a, b))),
    outputs: joinedCopies(outputs.pairs.map(([a, b]) => copyOf(b, a))),
    common: outputs.pairs.map(([port]) => port),
    differences: [...inputs.differences, ...outputs.differences, ...clocks],
    isUsable: inputs.differences.length === 0 && !outputs.isOtherwise && outputs.pairs.length > 0,
  };
}

interface RowMatch {
  readonly pairs: readonly (readonly [PortLayout, PortLayout])[];
  readonly differences: readonly string[];
  /** Whether some port has another width. */
  readonly isOtherwise: boolean;
}

function matchRows(kind: string, first: RowLayout, second: RowLayout): RowMatch {
  const byName = new Map(second.ports.map((port) => [port.name, port]));
  const pairs: [PortLayout, PortLayout][] = [];
  const widths: string[] = [];
  for (const port of first.ports) {
    const other = byName.get(port.name);
    if (other === undefined) continue;
    if (other.width === port.width) pairs.push([port, other]);
    else
      widths.push(
        `${kind} ${port.name} has ${bits(port)} in the first, ${bits(other)} in the second`,
      );
  }
  const [here, there] = [first, second].map(({ ports }) => ports.map(({ name }) => name));
  const lone = [...only(kind, here!, there!, 'second'), ...only(kind, there!, here!, 'first')];
  return { pairs, differences: [...widths, ...lone], isOtherwise: widths.length > 0 };
}

function only(
  kind: string,
  names: readonly string[],
  others: readonly string[],
  lacking: string,
): string[] {
  const known = new Set(others);
  const lone = names.filter((name) => !known.has(name));
  return lone.map((name) => `${kind} ${name} is not in the ${lacking}`);
}

const bits = ({ width }: PortLayout): string => (width === 1 ? '1 bit' : `${width} bits`);

const copyOf = (from: PortLayout, to: PortLayout): BitCopy => ({
  ...{ from: from.offset, to: to.offset, width: from.width },
});

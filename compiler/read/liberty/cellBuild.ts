import { GateKind } from '../../circuit/gates.js';
import { type NetId, NO_NET } from '../../circuit/ids.js';
import type { DiagnosticCode } from '../../diagnostics/codes.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { Recording } from '../verilog/elaborate/recording.js';
import { buildTruthTable } from '../verilog/elaborate/truthTable.js';
import type { LibertyCell } from './cell.js';
import { CellNets, type Context, scalarContext } from './cellNets.js';
import { exactFunction } from './exactFunction.js';
import { type Expression, type Operation, parseExpression } from './expression.js';
import type { LibertyText } from './syntax.js';

/** Takes what is wrong with the cell that is being built. */
export type CellReport = (
  code: DiagnosticCode,
  message: string,
  place: { readonly start: Position; readonly end: Position },
) => void;

const kinds: Readonly<Record<Operation, { plain: GateKind; inverted: GateKind }>> = {
  and: { plain: GateKind.And, inverted: GateKind.Nand },
  or: { plain: GateKind.Or, inverted: GateKind.Nor },
  xor: { plain: GateKind.Xor, inverted: GateKind.Xnor },
};

/** The logic of one cell while it is built: its functions become gates in its recording. */
export class CellBuild {
  readonly cell: LibertyCell;
  readonly recording: Recording;
  readonly nets: CellNets;
  readonly report: CellReport;
  // What clear and preset give is wanted for the state and for its inverse.
  readonly #built = new Map<LibertyText, NetId>();

  constructor(cell: LibertyCell, recording: Recording, report: CellReport) {
    this.cell = cell;
    this.recording = recording;
    this.nets = new CellNets(cell, recording);
    this.report = report;
  }

  /** The net of a function's value; undefined after a report. */
  function(text: LibertyText, context: Context): NetId | undefined {
    const known = context === scalarContext ? this.#built.get(text) : undefined;
    if (known !== undefined) return known;
    const expression = this.#parse(text);
    const net = expression && this.#buildExact(expression, text, context);
    if (net !== undefined && context === scalarContext) this.#built.set(text, net);
    return net;
  }

  /** The net of a function without a final inversion, and whether it has one. */
  polarity(
    text: LibertyText,
    context: Context,
  ): { readonly net: NetId; readonly isInverted: boolean } | undefined {
    const expression = this.#parse(text);
    if (expression === undefined) return undefined;
    const isInverted = expression.kind === 'not';
    const net = this.#buildExact(isInverted ? expression.operand : expression, text, context);
    return net === undefined ? undefined : { net, isInverted };
  }

  /** A new net driven by a gate. */
  gate(kind: GateKind, ...fanin: readonly NetId[]): NetId {
    return this.recording.gate(kind, fanin);
  }

  #parse(text: LibertyText): Expression | undefined {
    const expression = parseExpression(text.text);
    if (expression.kind !== 'fault') return expression;
    const { message, start, end } = expression;
    this.report('syntax-error', `this is no function: ${message}`, placeIn(text, start, end));
    return undefined;
  }

  #buildExact(expression: Expression, text: LibertyText, context: Context): NetId | undefined {
    const netOf = (name: string): NetId => {
      const net = this.nets.resolve(name, context);
      // A name without a net is reported where the text is built.
      return typeof net === 'number' ? net : NO_NET;
    };
    const exact = exactFunction(expression, netOf);
    if (exact === undefined || exact.inputs.includes(NO_NET)) {
      return this.#build(expression, text, context);
    }
    return buildTruthTable(exact.table, exact.inputs, this.recording);
  }

  #build(expression: Expression, text: LibertyText, context: Context): NetId | undefined {
    switch (expression.kind) {
      case 'constant':
        return this.recording.constant(expression.value === 1 ? GateKind.One : GateKind.Zero);
      case 'name':
        return this.#resolve(expression, text, context);
      case 'not':
        return this.#not(expression.operand, text, context);
      default:
        return this.#join(kinds[expression.kind].plain, expression.operands, text, context);
    }
  }

  #resolve(
    { name, start, end }: { name: string; start: number; end: number },
    text: LibertyText,
    context: Context,
  ): NetId | undefined {
    const net = this.nets.resolve(name, context);
    if (typeof net === 'number') return net;
    this.report(net.code, net.message, placeIn(text, start, end));
    return undefined;
  }

  #not(operand: Expression, text: LibertyText, context: Context): NetId | undefined {
    if ('operands' in operand) {
      return this.#join(kinds[operand.kind].inverted, operand.operands, text, context);
    }
    return this.#join(GateKind.Not, [operand], text, context);
  }

  #join(
    kind: GateKind,
    operands: readonly Expression[],
    text: LibertyText,
    context: Context,
  ): NetId | undefined {
    const nets = operands.map((operand) => this.#build(operand, text, context));
    const found = nets.filter((net) => net !== undefined);
    return found.length < nets.length ? undefined : this.gate(kind, ...found);
  }
}

/** The place of some characters of a text. */
export function placeIn(
  { text, start, end }: LibertyText,
  from: number,
  to: number,
): { readonly start: Position; readonly end: Position } {
  // Where characters and bytes differ, the whole text is shown.
  if (text.length !== end - start) return { start, end };
  return { start: start + from, end: start + to };
}

import type {
  Control,
  Design,
  Instance,
  Item,
  Module,
  Operation,
  Operator,
  Piece,
  Register,
  Role,
  Signal,
} from './model.js';
import { operators } from './model.js';
import { nameOf } from './naming.js';
import type {
  DesignRecipe,
  LatchRecipe,
  ModuleRecipe,
  PieceRecipe,
  RegisterRecipe,
  ShapeRecipe,
  WordRecipe,
} from './recipe.js';

const bit: ShapeRecipe = { width: 1, lsb: 0, isAscending: false, isVector: false, style: 0 };
const shapeOfWidth = (width: number): ShapeRecipe => ({ ...bit, width, isVector: true });

/** Makes a design of a recipe: all choices become signals that are there. */
export function designOf(recipe: DesignRecipe): Design {
  const modules: Module[] = [];
  for (const [index, each] of recipe.entries()) {
    const isTop = index === recipe.length - 1;
    modules.push(new ModuleMaker(each, isTop ? 'top' : `part${index}`, modules).make());
  }
  return { modules, top: modules.at(-1)! };
}

class ModuleMaker {
  readonly #recipe: ModuleRecipe;
  readonly #name: string;
  readonly #known: readonly Module[];
  /** What may be read, a growing list. */
  readonly #signals: Signal[] = [];
  readonly #inner: Signal[] = [];
  readonly #items: Item[] = [];
  #count = 0;

  constructor(recipe: ModuleRecipe, name: string, known: readonly Module[]) {
    this.#recipe = recipe;
    this.#name = name;
    this.#known = known;
  }

  make(): Module {
    const { inputs, parameter, registers, words, latches, laterWords, outputs } = this.#recipe;
    const clock = signal('clk', 'input', bit);
    const reset = signal('rst', 'input', shapeOfWidth(2));
    const parameterSignal = signal('K', 'parameter', shapeOfWidth(4));
    const ports = inputs.map((shape) => this.#signal('i', 'input', shape));
    const states = registers.map(({ shape, isPort }) =>
      this.#signal('q', 'register', shape, isPort),
    );
    this.#signals.push(reset, ...ports, ...states, parameterSignal);
    for (const word of words) this.#word(word);
    for (const latch of latches) this.#latch(latch);
    for (const word of laterWords) this.#word({ ...word, isInstance: false });
    for (const [i, register] of registers.entries()) this.#register(register, states[i]!);
    const outs = outputs.map(({ shape, source }) => {
      const target = this.#signal('y', 'output', shape);
      const piece = this.#piece(source, target.width);
      this.#items.push({ kind: 'operation', operator: 'copy', target, pieces: [piece], value: 0 });
      return target;
    });
    return {
      name: this.#name,
      clock,
      reset,
      inputs: ports,
      outputs: [...outs, ...states.filter(({ isPort }) => isPort)],
      parameter: parameterSignal,
      parameterValue: parameter,
      inner: [...states.filter(({ isPort }) => !isPort), ...this.#inner],
      items: this.#items,
    };
  }

  #signal(letter: string, role: Role, shape: ShapeRecipe, isPort = role === 'output'): Signal {
    return signal(nameOf(letter, this.#count++, shape.style), role, shape, isPort);
  }

  #piece(recipe: PieceRecipe, width: number, among: readonly Signal[] = this.#signals): Piece {
    const { signal: pick, low } = recipe;
    const chosen = among[pick % among.length]!;
    if (chosen.width <= width) {
      return { signal: chosen, low: 0, width: chosen.width, zeros: width - chosen.width };
    }
    return { signal: chosen, low: low % (chosen.width - width + 1), width, zeros: 0 };
  }

  #target(shape: ShapeRecipe, role: Role = 'wire'): Signal {
    const target = this.#signal('w', role, shape);
    this.#inner.push(target);
    return target;
  }

  #word(recipe: WordRecipe): void {
    if (recipe.isInstance && this.#known.length > 0) this.#instance(recipe);
    else this.#operation(recipe);
  }

  #operation({ operator: pick, shape, pieces, value }: WordRecipe): void {
    const operator = operators[pick % operators.length]!;
    const { own, widths } = widthsOf(operator, shape.width, value);
    let taken = widths.map((width, i) => this.#piece(pieces[i]!, width));
    // A bit is selected from a signal and from nothing else.
    if (operator === 'bitOf') taken = [this.#whole(taken[0]!), taken[1]!];
    const target = this.#target(
      own === shape.width ? shape : { ...shape, width: own, isVector: own > 1 || shape.isVector },
    );
    const count = operator === 'repeat' ? 1 + (value % 3) : value % 2 ** own;
    this.#items.push({ kind: 'operation', operator, target, pieces: taken, value: count });
    this.#signals.push(target);
  }

  #whole(piece: Piece): Piece {
    const { signal: of, width, zeros } = piece;
    if (zeros === 0 && of.width === width && of.role !== 'parameter') return piece;
    const all = width + zeros;
    const target = this.#target({ ...shapeOfWidth(all), lsb: of.lsb, isAscending: all === 4 });
    const copy: Operation = {
      kind: 'operation',
      operator: 'copy',
      target,
      pieces: [piece],
      value: 0,
    };
    this.#items.push(copy);
    return { signal: target, low: 0, width: all, zeros: 0 };
  }

  #instance({ pieces, value, shape }: WordRecipe): void {
    const module = this.#known[value % this.#known.length]!;
    const count = 1 + ((value >> 2) % 3);
    const isShared = (i: number): boolean => ((value >> (4 + (i & 1))) & 1) === 1;
    const inputs = module.inputs.map((port, i) => {
      const recipe = pieces[i % pieces.length]!;
      return this.#piece(recipe, isShared(i) ? port.width : port.width * count);
    });
    const targets = module.outputs.map((port) => {
      const width = port.width * count;
      return this.#target({ ...shape, width, isVector: width > 1 || shape.isVector });
    });
    const name = nameOf('u', this.#count++, shape.style);
    const parameter = (value & 64) === 0 ? undefined : value & 15;
    const made: Instance = { kind: 'instance', name, module, count, parameter, inputs, targets };
    this.#items.push(made);
    this.#signals.push(...targets);
  }

  #latch({ shape, data, level }: LatchRecipe): void {
    const target = this.#target(shape, 'latch');
    const piece = this.#piece(data, target.width);
    this.#items.push({ kind: 'latch', target, data: piece, level });
    this.#signals.push(target);
  }

  #register(recipe: RegisterRecipe, target: Signal): void {
    const { data, isFalling, enable, clear, controls, initial } = recipe;
    const most = 2 ** target.width;
    // No constant: a register that is never enabled is none.
    const changing = this.#signals.filter(({ role }) => role !== 'wire' && role !== 'parameter');
    const made: Register = {
      kind: 'register',
      target,
      data: this.#piece(data, target.width),
      isFalling,
      enable: enable === null ? undefined : this.#piece(enable, 1, changing),
      clear:
        clear === null
          ? undefined
          : { by: this.#piece(clear.by, 1, changing), value: clear.value % most },
      controls: controls.map(({ isLow, value }, index): Control => {
        return { bit: index, level: isLow ? 0 : 1, value: value % most };
      }),
      initial: initial === null ? undefined : initial % most,
    };
    this.#items.push(made);
  }
}

function signal(name: string, role: Role, shape: ShapeRecipe, isPort = role === 'input'): Signal {
  const { width, lsb, isAscending, isVector } = shape;
  const far = lsb + width - 1;
  const range = isAscending ? { msb: lsb, lsb: far } : { msb: far, lsb };
  return { name, role, isPort, width, isVector, ...(isVector ? range : { msb: 0, lsb: 0 }) };
}

/** The width of an operator's result, and that of its pieces. */
function widthsOf(
  operator: Operator,
  width: number,
  value: number,
): { readonly own: number; readonly widths: readonly number[] } {
  const same = (count: number): number[] => new Array<number>(count).fill(width);
  switch (operator) {
    case 'constant':
      return { own: width, widths: [] };
    case 'copy':
    case 'not':
    case 'negate':
    case 'square':
      return { own: width, widths: same(1) };
    case 'mux':
    case 'bus':
      return { own: width, widths: [1, width, width] };
    case 'pulledUp':
    case 'pulledDown':
      return { own: width, widths: [1, width] };
    case 'shiftLeft':
    case 'shiftRight':
    case 'shiftSigned':
      return { own: width, widths: [width, 1 + (value % 3)] };
    case 'allOf':
    case 'notAllOf':
    case 'anyOf':
    case 'noneOf':
    case 'parity':
    case 'notParity':
    case 'logicalNot':
      return { own: 1, widths: same(1) };
    case 'logicalAnd':
    case 'logicalOr':
      return { own: 1, widths: [width, 1 + (value % 3)] };
    case 'equal':
    case 'unequal':
    case 'same':
    case 'notSame':
    case 'less':
    case 'notMore':
    case 'more':
    case 'notLess':
    case 'lessSigned':
    case 'notLessSigned':
      return { own: 1, widths: same(2) };
    case 'join':
      return { own: width + 1 + (value % 3), widths: [width, 1 + (value % 3)] };
    case 'repeat':
      return { own: width * (1 + (value % 3)), widths: same(1) };
    case 'bitOf': {
      const digits = 2 + (value % 2);
      return { own: 1, widths: [2 ** digits, digits] };
    }
    case 'gateBuf':
    case 'gateNot':
      return { own: 1, widths: [1] };
    case 'gateAnd':
    case 'gateNand':
    case 'gateOr':
    case 'gateNor':
    case 'gateXor':
    case 'gateXnor':
      return { own: 1, widths: new Array<number>(1 + (value % 4)).fill(1) };
    default:
      return { own: width, widths: same(2) };
  }
}

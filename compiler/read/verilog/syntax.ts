import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../names.js';
import type { Expression, Placed, RangeSyntax, Strength } from './expressionSyntax.js';
import type { InstanceTable } from './instances.js';

export type {
  BinaryOperator,
  Expression,
  NameExpression,
  NumberExpression,
  PartExpression,
  RangeSyntax,
  SelectExpression,
  Strength,
  UnaryOperator,
} from './expressionSyntax.js';

/**
 * The syntax tree of Verilog (IEEE 1364-2005), as far as netlists, cell models and synthesizable
 * code need it. What a zero-delay model sets aside (lengths of delays, specify blocks) is not in
 * the tree. Names are ids in one table; places are positions in one source map.
 */
export interface VerilogSyntax {
  readonly names: NameTable;
  readonly modules: readonly ModuleSyntax[];
  readonly primitives: readonly PrimitiveSyntax[];
}

// ---- Statements (clause 9) ----

export type Statement =
  | (Placed & {
      readonly kind: 'block';
      readonly name: NameId;
      readonly declarations: readonly Item[];
      readonly body: readonly Statement[];
    })
  | AssignStatement
  | (Placed & {
      readonly kind: 'if';
      readonly condition: Expression;
      readonly whenTrue: Statement;
      readonly whenFalse: Statement | undefined;
    })
  | (Placed & {
      readonly kind: 'case';
      readonly mode: 'case' | 'casex' | 'casez';
      readonly subject: Expression;
      /** No labels: the default. */
      readonly items: readonly {
        readonly labels: readonly Expression[];
        readonly body: Statement;
      }[];
      /** From a synthesis attribute (`full_case`, `parallel_case`); informative only. */
      readonly attributes: readonly string[];
    })
  | (Placed & {
      readonly kind: 'for';
      readonly initial: AssignStatement;
      readonly condition: Expression;
      readonly step: AssignStatement;
      readonly body: Statement;
    })
  | (Placed & { readonly kind: 'repeat'; readonly count: Expression; readonly body: Statement })
  | (Placed & { readonly kind: 'while'; readonly condition: Expression; readonly body: Statement })
  | (Placed & { readonly kind: 'forever'; readonly body: Statement })
  /** Call of a task, or of a system task where the name begins with `$`. */
  | (Placed & {
      readonly kind: 'callTask';
      readonly path: readonly NameId[];
      readonly arguments: readonly Expression[];
    })
  /** `@(...) statement`; `events` undefined for `@*`. */
  | (Placed & {
      readonly kind: 'event';
      readonly events: readonly EventSyntax[] | undefined;
      readonly body: Statement;
    })
  /** `#3 statement`, but for a delay that is plainly 0; its length is set aside. */
  | (Placed & { readonly kind: 'delay'; readonly body: Statement })
  /** `wait (c) statement`. */
  | (Placed & { readonly kind: 'wait'; readonly condition: Expression; readonly body: Statement })
  | (Placed & { readonly kind: 'disable'; readonly path: readonly NameId[] })
  /** Procedural `assign`, `deassign`, `force`, `release`: parsed, for a clear refusal. */
  | (Placed & { readonly kind: 'procedural'; readonly keyword: string })
  | (Placed & { readonly kind: 'null' });

/** `target = value` or `target <= value`. */
export interface AssignStatement extends Placed {
  readonly kind: 'assign';
  readonly blocking: boolean;
  /** Set where a delay within it (`q = #3 a`) puts it off; the delay itself is set aside. */
  readonly delayed?: true;
  readonly target: Expression;
  readonly value: Expression;
}

export interface EventSyntax extends Placed {
  readonly edge: 'posedge' | 'negedge' | 'any';
  readonly expression: Expression;
}

// ---- Module items (clause 12 and annex A.1 to A.6) ----

export type NetType =
  | 'wire'
  | 'tri'
  | 'wand'
  | 'wor'
  | 'triand'
  | 'trior'
  | 'tri0'
  | 'tri1'
  | 'trireg'
  | 'supply0'
  | 'supply1'
  | 'uwire';

export type Direction = 'input' | 'output' | 'inout';

export type Item =
  | DeclarationItem
  | ParameterItem
  | (Placed & {
      readonly kind: 'assign';
      readonly target: Expression;
      readonly value: Expression;
      readonly strength: Strength | undefined;
    })
  /** `count` instances from `first` on in the module's instance table. */
  | { readonly kind: 'instances'; readonly first: number; count: number }
  | (Placed & { readonly kind: 'always'; readonly body: Statement })
  | (Placed & { readonly kind: 'initial'; readonly body: Statement })
  | RoutineItem
  | (Placed & {
      readonly kind: 'defparam';
      readonly path: readonly NameId[];
      /** As in `NameExpression`. */
      readonly indices?: readonly (Expression | undefined)[];
      readonly value: Expression;
    })
  | (Placed & {
      readonly kind: 'generateFor';
      readonly genvar: NameId;
      readonly initial: Expression;
      readonly condition: Expression;
      readonly stepName: NameId;
      readonly step: Expression;
      readonly body: GenerateBlock;
    })
  | (Placed & {
      readonly kind: 'generateIf';
      readonly condition: Expression;
      readonly whenTrue: GenerateBlock;
      readonly whenFalse: GenerateBlock | undefined;
    })
  | (Placed & {
      readonly kind: 'generateCase';
      readonly subject: Expression;
      readonly items: readonly {
        readonly labels: readonly Expression[];
        readonly body: GenerateBlock;
      }[];
    })
  | (Placed & { readonly kind: 'generateBlock'; readonly body: GenerateBlock });

/** Items of a generate branch; `name` 0 where it has none. */
export interface GenerateBlock extends Placed {
  readonly name: NameId;
  readonly items: readonly Item[];
}

/** A declaration of nets, variables or ports; one item lists the names that share a type. */
export interface DeclarationItem extends Placed {
  readonly kind: 'declaration';
  /** Set for a port declaration (also one that gives the type at once). */
  readonly direction: Direction | undefined;
  /**
   * The type word, or undefined for a bare `input a;`. Under `default_nettype` an implicit net
   * port has that type.
   */
  readonly type:
    | NetType
    | 'reg'
    | 'integer'
    | 'time'
    | 'real'
    | 'realtime'
    | 'event'
    | 'genvar'
    | undefined;
  readonly signed: boolean;
  readonly range: RangeSyntax | undefined;
  readonly strength: Strength | undefined;
  /** In order; an array, or a list that makes its entries while it is gone over. */
  readonly names: Iterable<DeclaredName> & { readonly length: number };
}

export interface DeclaredName extends Placed {
  readonly name: NameId;
  /** Array dimensions after the name: `m [0:15]`. */
  readonly dimensions: readonly RangeSyntax[];
  /** `wire a = b;` or `reg q = 0;`. */
  readonly value: Expression | undefined;
}

export interface ParameterItem extends Placed {
  readonly kind: 'parameter';
  readonly local: boolean;
  /** `integer` and the like make a signed 32-bit parameter; undefined: type of the value. */
  readonly type: 'integer' | 'time' | 'real' | 'realtime' | undefined;
  readonly signed: boolean;
  readonly range: RangeSyntax | undefined;
  readonly values: readonly (Placed & { readonly name: NameId; readonly value: Expression })[];
}

export interface RoutineItem extends Placed {
  readonly kind: 'function' | 'task';
  readonly name: NameId;
  readonly automatic: boolean;
  /** Of a function's result. */
  readonly signed: boolean;
  readonly range: RangeSyntax | undefined;
  readonly resultType: 'integer' | 'real' | 'time' | 'realtime' | undefined;
  /** Arguments (with direction) and local variables, in order. */
  readonly declarations: readonly Item[];
  readonly body: Statement;
}

/** A port in a module's header: `a`, `.x(a[3:0])`, `.y({b, c})`, or empty. */
export interface HeaderPort extends Placed {
  /** The name seen from outside; 0 for an unnamed port expression. */
  readonly name: NameId;
  /** Undefined: an empty port. */
  readonly expression: Expression | undefined;
}

export interface ModuleSyntax extends Placed {
  readonly name: NameId;
  readonly nameStart: Position;
  /** Within `celldefine` … `endcelldefine`. */
  readonly isCell: boolean;
  /** `default_nettype` in force at the module; undefined for `none`. */
  readonly defaultNetType: NetType | undefined;
  /** `unconnected_drive` in force: the value of unconnected inputs. */
  readonly unconnectedDrive: 0 | 1 | undefined;
  /** In header order. ANSI ports appear here and as declarations among the items. */
  readonly ports: readonly HeaderPort[];
  readonly items: readonly Item[];
  readonly instances: InstanceTable;
}

// ---- User-defined primitives (clause 8) ----

export interface PrimitiveSyntax extends Placed {
  readonly name: NameId;
  readonly nameStart: Position;
  /** Output first. */
  readonly ports: readonly NameId[];
  readonly sequential: boolean;
  /** `initial q = 1'b0;` */
  readonly initial: 0 | 1 | 2 | undefined;
  readonly rows: readonly PrimitiveRow[];
}

export interface PrimitiveRow extends Placed {
  /**
   * One text per input: a level symbol (`0 1 x ? b`), an edge symbol (`r f p n *`) or a pair
   * in brackets (`(01)`, `(?x)`).
   */
  readonly inputs: readonly string[];
  /** State symbol of a sequential primitive (`0 1 x ? b`), undefined for combinational ones. */
  readonly state: string | undefined;
  /** `0 1 x -`. */
  readonly output: string;
}

import type { NetType } from '../../../circuit/busParts.js';
import type { ModuleNames } from '../../../circuit/hierarchy.js';
import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import type { BlockScope } from './blockScope.js';
import type { Children } from './children.js';
import type { OuterMemory, OuterNet } from './outer.js';
import type { Recording } from './recording.js';

/** What a module, its instances included, does to a net. */
export const Drive = {
  None: 0,
  /** Drives it at all times, and wants to be alone in that. */
  Full: 1,
  /** Drives it part of the time, or as one of several that a wired net allows. */
  Shared: 2,
  /** Gives it a value where nothing else does: a pull, or a switch of open direction. */
  Weak: 3,
} as const;

/** A port of a module as its instances see it. */
export interface TemplatePort {
  /** 0 for a port without name, which only a place in the list reaches. */
  readonly name: NameId;
  /** `Flag.Input`, `Flag.Output` or `Flag.Inout`. */
  readonly direction: number;
  /** First place of its bits in the boundary. */
  readonly offset: number;
  readonly width: number;
  /** Declared left and right index, where the port is one whole signal. */
  readonly range: { readonly msb: number; readonly lsb: number } | undefined;
}

/** Two places of a boundary with one net behind them. */
export interface Repeat {
  readonly first: number;
  readonly second: number;
}

/** The names of values of a signal, whose nets come with the least significant one first. */
export interface SignalValues {
  readonly nets: readonly NetId[];
  readonly names: ReadonlyMap<number, string>;
}

/** The names of a module or of a block inside it, with the module's nets behind them. */
export interface BlockNames {
  /** Name of the block; unused for the module itself, which comes first. */
  readonly name: string;
  /** Index of the block around it. */
  readonly parent: number;
  readonly names: ModuleNames;
  /** One net for each bit, in the order of `Signal.offset`. */
  readonly nets: Uint32Array;
}

/**
 * One module with one set of parameter values, ready to be stamped into the circuit: its logic,
 * its instances, and what its boundary does.
 *
 * Net ids are those of the recording. Where `canonical` is present, `canonical[n]` is the net that
 * net n is one with; it is never greater than n.
 */
export interface Template {
  readonly name: string;
  readonly isCell: boolean;
  /** Set for a black box: its ports become ports of the circuit. */
  readonly isBox?: true;
  readonly recording: Recording;
  readonly children: Children;
  readonly canonical: Uint32Array | undefined;
  /** A 1 for each net that nothing needs; undefined where there is none. */
  readonly unused: Uint8Array | undefined;
  readonly ports: readonly TemplatePort[];
  /** Index into `ports` by name. */
  readonly portOfName: ReadonlyMap<NameId, number>;
  /** Whether connections may be given by place in `ports`. */
  readonly hasPortOrder: boolean;
  /** The nets of all ports, each least significant bit first. */
  readonly boundary: Uint32Array;
  /** Per place of the boundary: the `Drive` of that net. */
  readonly drives: Uint8Array;
  /** Per place of the boundary: whether the module reads that net. */
  readonly reads: Uint8Array;
  /** Usually empty; the nets that an instance connects to the two places become one. */
  readonly repeats: readonly Repeat[];
  /** Empty for a primitive: its instances make no scope. */
  readonly blocks: readonly BlockNames[];
  /**
   * Nets that are one with nets of the module around. Present where names lead there, so that the
   * template is of one instance alone.
   */
  readonly outerNets?: readonly OuterNet[];
  /** Likewise memories. */
  readonly outerMemories?: readonly OuterMemory[];
  /** For hierarchical names; undefined for a primitive. */
  readonly scope: BlockScope | undefined;
  /** The nets whose type says more than `wire`; absent where there is none. */
  readonly netTypes?: readonly (readonly [net: number, type: NetType])[];
  /** Absent where all nets that are read have drivers or are those of ports. */
  readonly mayHaveOpen?: true;
  /** Nets that only a constant drives, see `constantNetsOf`; absent where there is none. */
  readonly constants?: ReadonlyMap<number, 0 | 1>;
  /** Names of values of signals; absent where there is none. */
  readonly valueNames?: readonly SignalValues[];
  /** Drivers that give variables which nothing assigns their value at power-up. */
  readonly defaults?: ReadonlySet<number>;
  /** Values at power-up of variables of other modules; absent where there is none. */
  readonly farInitials?: readonly (readonly [net: number, value: 0 | 1])[];
  /**
   * For a primitive: the number of the template for instances that have inputs tied to constants.
   * `key` has a digit of base 3 for each input, the first one the least: 0 for what may change, 1
   * for a constant 0, 2 for a constant 1.
   */
  readonly tied?: (key: number) => number;
  /** Says what there is to say where an instance is in the circuit; absent where that is nothing. */
  readonly whenUsed?: () => void;
  /** The `Drive` of any net. */
  driveOf(net: NetId): number;
  /** Whether the module or its instances read a net. */
  readsNet(net: NetId): boolean;
}

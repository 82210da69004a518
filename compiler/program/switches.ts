/**
 * Passes that can be left out, each by `false`, to measure what it gains. Whatever is left out,
 * responses, states and names stay the same.
 */
export interface PassSwitches {
  /**
   * Equal nodes are made once (structural hashing); `mergeRegisters` and `sweepNodes` are left out
   * with it.
   */
  readonly share?: boolean;
  /** Exclusive-ors and multiplexers are recognised in and/or form. */
  readonly recover?: boolean;
  /** Logic that nothing reads is dropped, and remembered inputs with it. */
  readonly compact?: boolean;
  /** Registers that never differ from the given start on are merged. */
  readonly mergeRegisters?: boolean;
  /** Operations that are always equal are made once, though they are built differently. */
  readonly sweepNodes?: boolean;
  /** Operations that are made many times over are packed, sixteen in a vector. */
  readonly packWords?: boolean;
  /** Where words are packed: ripple adders and counters are made as additions of numbers. */
  readonly addWords?: boolean;
  /** Where nothing is packed: registers of one enable or reset are updated sixteen at a time. */
  readonly groupRegisters?: boolean;
  /** Where nothing is packed: parts that are computed with fewer operations are replaced. */
  readonly rewriteCuts?: boolean;
  /** Each node is kept in the polarity that leaves few inversions. */
  readonly choosePolarity?: boolean;
  /** Cones that share logic are computed one after another. */
  readonly orderSinks?: boolean;
  /** A handful of state bits stand in locals while cycles run. */
  readonly holdStates?: boolean;
  /** Branches that are never taken keep operations in their order. */
  readonly fences?: boolean;
  /** Outputs that are neighbouring registers are not stored again. */
  readonly aliasOutputs?: boolean;
  /** Cycles in which nothing changes are passed over. */
  readonly guards?: boolean;
  /** Small machines run by a table of the cycles that have come before. */
  readonly tables?: boolean;
  /** Most operations of a generated function; 1,200 unless given. */
  readonly blockNodes?: number;
}

/** The switches that leave a pass out. */
export const passNames = [
  'share',
  'recover',
  'compact',
  'mergeRegisters',
  'sweepNodes',
  'packWords',
  'addWords',
  'groupRegisters',
  'rewriteCuts',
  'choosePolarity',
  'orderSinks',
  'holdStates',
  'fences',
  'aliasOutputs',
  'guards',
  'tables',
] as const satisfies readonly (keyof PassSwitches)[];

declare const kindOfId: unique symbol;

/** A number that identifies one thing of the named kind, and nothing else. */
type Id<Kind extends string> = number & { readonly [kindOfId]: Kind };

/** Index of a net in a circuit: 0 … netCount-1. */
export type NetId = Id<'net'>;

/** Index of a register in `Circuit.registers`. */
export type RegisterId = Id<'register'>;

/** Index of a latch in `Circuit.latches`. */
export type LatchId = Id<'latch'>;

/** The value that stands where an optional net (a set, a reset, an enable) is absent. */
export const NO_NET = 0xffffffff as NetId;

/** Makes a net id of a plain number, for loops over all nets. */
export const netId = (index: number): NetId => index as NetId;

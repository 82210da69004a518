/** What things cost, in instructions. */
export const Cost = {
  /** An and or exclusive-or of one bit, with the inversions that come with some. */
  bit: 1.15,
  /** A multiplexer of one bit. */
  mux: 3,
  vector: 1,
  vectorMux: 3,
  splat: 1,
  /** Bringing the lanes of one vector into another order. */
  permute: 5,
  /** Joining lanes of one more vector. */
  join: 11,
  /** Bits of one more vector as the lowest ones of whole bytes. */
  stack: 3,
  /** Storing sixteen bits of the response row. */
  half: 4,
  /** Storing one bit that is computed by itself, for a vector to hold it. */
  gather: 1.5,
  /** Copying a bit of the state, or an input, for that. */
  copy: 2,
  /** Reading a lane as a bit: a load in place of a register. */
  lane: 1.2,
  store: 1,
  /** Sixteen input bits spread over lanes. */
  inputs: 4,
  /** The number that sixteen lanes make. */
  number: 2,
  /** Joining sixteen more bits to a number. */
  joinNumber: 2,
  /** One operation on numbers. */
  arithmetic: 1,
  /** What is done once for all bits of a sum that vectors or single operations read. */
  bytes: 3,
  /** Sixteen bits of it. */
  bits: 4,
  /** Waiting for narrow stores before a vector can be loaded from them. */
  stall: 8,
} as const;

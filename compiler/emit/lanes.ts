/** Bytes of a vector. */
export const LANES = 16;

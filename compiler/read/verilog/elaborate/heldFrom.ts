/**
 * Arrays of variables with at least so many bits are held as a memory, if they can be. With fewer,
 * registers are hardly slower, and each bit has a name and is known by itself where it can be x.
 */
export const HELD_FROM = 257;

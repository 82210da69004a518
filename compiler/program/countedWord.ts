/**
 * What a lane module that counts keeps for each word of its response: numbers of 64 bits, one behind
 * another, of which the last two are there in three-valued modules alone.
 */
export const CountedWord = {
  /** Changes between 0 and 1 from one lane to the next. */
  Changes: 0,
  /** Lanes with a 1. */
  Ones: 1,
  /** The upper lanes of the row before: the uppermost one is what the first lane is compared with. */
  Last: 2,
  /** Lanes with x. */
  Unknown: 3,
  /** As `Last`, of what tells x. */
  LastUnknown: 4,
} as const;

/** 64-bit numbers for each word. */
export const countedNumbers = (threeValued: boolean): number => (threeValued ? 5 : 3);

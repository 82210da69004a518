/** When C is compiled: `auto` leaves out circuits that would keep the compiler busy for minutes. */
export type NativeChoice = (typeof nativeChoices)[number];

/** All of them, the default first. */
export const nativeChoices = ['auto', 'always', 'never'] as const;

/** How `benchDesign` measures. */
export interface BenchOptions {
  /** Seconds of measured running for each engine; default 1. Warming up comes on top. */
  readonly seconds?: number;
  /** Parts that these are cut into, the engines taking turns; default 7. */
  readonly rounds?: number;
  /** Default `auto`. */
  readonly native?: NativeChoice;
  /** Where CC and PATH are looked up; that of the process unless given. */
  readonly environment?: NodeJS.ProcessEnv;
  /** Is told what comes next. */
  readonly onProgress?: (step: string) => void;
}

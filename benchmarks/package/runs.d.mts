/** Milliseconds from nothing to the outputs after the first step. */
export function loadAndStep(address: string): Promise<number>;
/** Cycles a second on random rows, once the engine has settled on its code. */
export function cyclesPerSecond(address: string): Promise<number>;

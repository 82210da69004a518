export { type Departure, departureText, ExpectationChecker } from './expectation.js';
export { ResponseTable } from './responseTable.js';
export { ResponseWriter } from './responseWriter.js';
export { readStimulus } from './stimulusTable.js';
export { TableError } from './tableError.js';
export type { TableBytes } from './tableInput.js';

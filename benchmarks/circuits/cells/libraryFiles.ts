import { libertyFile, libertyLibrary } from './liberty/library.js';
import {
  primitivesFile,
  verilogFile,
  verilogLibrary,
  verilogPrimitives,
} from './verilog/library.js';

/** A file of the library, as text in chunks of whole lines. */
export interface LibraryFile {
  readonly name: string;
  chunks(): Iterable<string>;
}

/** The Verilog library, the primitives that it includes, and the Liberty library. */
export const libraryFiles: readonly LibraryFile[] = [
  { name: verilogFile, chunks: verilogLibrary },
  { name: primitivesFile, chunks: verilogPrimitives },
  { name: libertyFile, chunks: libertyLibrary },
];

import type { PortLayout } from '../../layout.js';
import type { KeptMemory, KeptNet } from '../description.js';
import type { Value } from '../values.js';

/** What the worker's side can be asked for. */
export type Method =
  | 'load'
  | 'write'
  | 'read'
  | 'step'
  | 'run'
  | 'runRows'
  | 'runUntil'
  | 'peek'
  | 'save'
  | 'restore'
  | 'reset'
  | 'subscribe'
  | 'unsubscribe';

/** A message to the worker: a call, or the wish to end one. */
export type Request =
  | { readonly id: number; readonly method: Method; readonly args: readonly unknown[] }
  | { readonly id: number; readonly cancel: true };

/** An error as it travels. */
export interface ErrorText {
  readonly name: string;
  readonly message: string;
  /** Of a `RunFault`. */
  readonly completed?: number;
  readonly place?: string;
}

/** A message from the worker. */
export type Reply =
  | { readonly id: number; readonly result: unknown; readonly cycle: number }
  | { readonly id: number; readonly error: ErrorText; readonly cycle: number }
  | { readonly id: number; readonly done: number }
  | {
      readonly id: number;
      readonly changes: Readonly<Record<string, Value>>;
      readonly cycle: number;
    };

/** What is known of a model once it is loaded. */
export interface Loaded {
  readonly name: string;
  readonly clocks: readonly string[];
  readonly inputs: readonly PortLayout[];
  readonly outputs: readonly PortLayout[];
  readonly nets: readonly KeptNet[];
  readonly memories: readonly KeptMemory[];
  readonly inputWords: number;
  readonly outputWords: number;
}

/** Name of the error of a call that was cancelled. */
export const CANCELLED = 'AbortError';

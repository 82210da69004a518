import type { Position } from '../../diagnostics/sourceMap.js';
import type { GroupRule } from './rules.js';
import type { LibertyGroup, LibertyText } from './syntax.js';

// Most groups keep nothing: they share these.
const noAttributes: ReadonlyMap<string, readonly LibertyText[]> = new Map();
const noGroups: readonly OpenGroup[] = [];

/** A group that is being filled, and the rule of what it keeps. */
export class OpenGroup implements LibertyGroup {
  readonly kind: string;
  readonly names: readonly LibertyText[];
  readonly rule: GroupRule;
  readonly start: Position;
  readonly end: Position;
  #attributes: Map<string, readonly LibertyText[]> | undefined;
  #groups: OpenGroup[] | undefined;

  constructor(
    kind: string,
    names: readonly LibertyText[],
    rule: GroupRule,
    start: Position,
    end: Position,
  ) {
    this.kind = kind;
    this.names = names;
    this.rule = rule;
    this.start = start;
    this.end = end;
  }

  get attributes(): ReadonlyMap<string, readonly LibertyText[]> {
    return this.#attributes ?? noAttributes;
  }

  get groups(): readonly OpenGroup[] {
    return this.#groups ?? noGroups;
  }

  /** Gives an attribute its values, in the place of earlier ones. */
  set(name: string, values: readonly LibertyText[]): void {
    this.#attributes ??= new Map();
    this.#attributes.set(name, values);
  }

  /** Adds a group inside this one. */
  add(group: OpenGroup): void {
    this.#groups ??= [];
    this.#groups.push(group);
  }
}

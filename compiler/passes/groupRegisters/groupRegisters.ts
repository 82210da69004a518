import {
  FALSE,
  type Literal,
  type Logic,
  LogicOp,
  type LogicState,
  type StateUpdate,
  TRUE,
  UPDATE_WIDTH,
} from '../../logic/logic.js';
import { type Placement, placeStates } from './placement.js';
import { type Recipe, recipesOf } from './recipes.js';

/**
 * Operations that must be saved for the wait until what has been stored bit by bit can be loaded as
 * a vector. Cycles of more than `SHORT` operations have other things to do meanwhile.
 */
const WAIT = 60;
const SHORT = 400;

/**
 * Lays state bits next to each other that change in the same way, and takes what they have in
 * common (an enable, a synchronous reset, a plain copy) out of their logic, so that sixteen of them
 * are updated in one step.
 */
export function groupRegisters(logic: Logic): Logic {
  const recipes = recipesOf(logic);
  const placement = placeStates(logic, recipes);
  const placeOf = new Uint32Array(recipes.length);
  for (const [place, bit] of placement.entries()) if (bit >= 0) placeOf[bit] = place;
  const moved = { ...logic, a: movedStates(logic, placeOf) };
  const updates = worthwhile(moved, updatesOf(moved, recipes, placement));
  const isUpdated = new Uint8Array(placement.length);
  for (const { first } of updates) isUpdated.fill(1, first, first + UPDATE_WIDTH);
  const unused: LogicState = { role: 'unused', index: 0 };
  return {
    ...moved,
    states: placement.map((bit) => logic.states[bit] ?? unused),
    next: placement.map((bit, place) => {
      if (bit < 0) return FALSE;
      return isUpdated[place] === 1 ? recipes[bit]!.data : logic.next[bit]!;
    }),
    updates,
  };
}

function movedStates(logic: Logic, placeOf: Uint32Array): Uint32Array {
  return logic.a.map((a, node) => (logic.op[node] === LogicOp.State ? placeOf[a]! : a));
}

// Without the updates that wait for single bits, where they do not save enough.
function worthwhile(logic: Logic, updates: readonly StateUpdate[]): readonly StateUpdate[] {
  const operations = logic.op.reduce((sum, op) => sum + (op >= LogicOp.And ? 1 : 0), 0);
  const saved = updates.reduce((sum, { from, enable, gate }) => {
    const each = (enable === TRUE ? 0 : 3) + (gate === TRUE ? 0 : 1);
    return from < 0 ? sum + UPDATE_WIDTH * each : sum;
  }, 0);
  return operations > SHORT || saved >= WAIT ? updates : updates.filter(({ from }) => from >= 0);
}

// An update starts where a stretch of bits of one recipe starts.
function updatesOf(logic: Logic, recipes: readonly Recipe[], placement: Placement): StateUpdate[] {
  const updates: StateUpdate[] = [];
  for (let first = 0; first + UPDATE_WIDTH <= placement.length; ) {
    const update = updateAt(logic, recipes, placement, first);
    if (update === undefined) first++;
    else {
      updates.push(update);
      first += UPDATE_WIDTH;
    }
  }
  return updates;
}

function updateAt(
  logic: Logic,
  recipes: readonly Recipe[],
  placement: Placement,
  first: number,
): StateUpdate | undefined {
  const leader = recipes[placement[first]!];
  if (leader === undefined) return undefined;
  const { gate, enable, data } = leader;
  let from = sourceOf(logic, data);
  for (let i = 1; i < UPDATE_WIDTH; i++) {
    const bit = placement[first + i]!;
    if (bit < 0) continue;
    const recipe = recipes[bit]!;
    if (recipe.gate !== gate || recipe.enable !== enable) return undefined;
    if (from >= 0 && sourceOf(logic, recipe.data) !== from + i) from = -1;
  }
  if (from + UPDATE_WIDTH > placement.length) from = -1;
  // Without anything in common but the place there is nothing to do.
  return gate === TRUE && enable === TRUE && from < 0 ? undefined : { first, gate, enable, from };
}

/** The state bit that a literal is, at its new place, or -1. */
function sourceOf(logic: Logic, literal: Literal): number {
  const isPlain = (literal & 1) === 0 && logic.op[literal >>> 1] === LogicOp.State;
  return isPlain ? logic.a[literal >>> 1]! : -1;
}

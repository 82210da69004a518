import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Cuts } from '../../../compiler/passes/rewriteCuts/cuts.js';
import { Network, NodeKind } from '../../../compiler/passes/rewriteCuts/network.js';

const LEAVES = 5;

/** A network of some leaves and operations on earlier literals. */
const networks = fc
  .array(fc.tuple(fc.boolean(), fc.nat(), fc.nat()), { minLength: 1, maxLength: 30 })
  .map((operations) => {
    const network = new Network();
    const literals = Array.from({ length: LEAVES }, () => network.leaf());
    for (const [isXor, p, q] of operations) {
      const [left, right] = [p, q].map((n) => literals[(n >>> 1) % literals.length]! ^ (n & 1));
      literals.push(isXor ? network.xor(left!, right!) : network.and(left!, right!));
    }
    return network;
  });

/** The values of all nodes for all combinations of the leaves, a bit of a number for each. */
function valuesOf(network: Network): Int32Array {
  const value = new Int32Array(network.nodeCount);
  const columns = [0xaaaaaaaa, 0xcccccccc, 0xf0f0f0f0, 0xff00ff00, 0xffff0000];
  for (let node = 1; node < network.nodeCount; node++) {
    const of = (literal: number): number => value[literal >>> 1]! ^ -(literal & 1);
    if (node <= LEAVES) value[node] = columns[node - 1]!;
    else {
      const [p, q] = [of(network.left(node)), of(network.right(node))];
      value[node] = network.kind(node) === NodeKind.Xor ? p ^ q : p & q;
    }
  }
  return value;
}

describe('Cuts', () => {
  it('tells which function of its leaves a node is', () => {
    fc.assert(
      fc.property(networks, (network) => {
        const cuts = new Cuts(network, 12);
        const value = valuesOf(network);
        for (let node = LEAVES + 1; node < network.nodeCount; node++) {
          const first = cuts.first(node);
          expect(cuts.count(node)).toBeGreaterThan(0);
          for (let cut = first; cut < first + cuts.count(node); cut++) {
            const leaves = [0, 1, 2, 3].map((i) => cuts.leaf(cut, i)).filter((leaf) => leaf >= 0);
            for (let trial = 0; trial < 32; trial++) {
              const place = leaves.reduce((so, l, i) => so | (((value[l]! >>> trial) & 1) << i), 0);
              expect((cuts.table(cut) >>> place) & 1).toBe((value[node]! >>> trial) & 1);
            }
          }
        }
      }),
      { seed: 33, numRuns: 60 },
    );
  });
});

describe('Network', () => {
  it('counts what a replacement saves', () => {
    const network = new Network();
    const [a, b, c] = [network.leaf(), network.leaf(), network.leaf()];
    const [ab, ac] = [network.and(a, b), network.and(a, c)];
    const either = network.and(ab ^ 1, ac ^ 1) ^ 1;
    expect([network.read(either), network.read(ab)]).toEqual([3, 0]);
    expect(network.takeOut(either >>> 1)).toBe(2);
    network.bringBack(either >>> 1, 1);
    const factored = network.and(a, network.and(b ^ 1, c ^ 1) ^ 1);
    network.replace(either >>> 1, factored ^ 1);
    expect(network.now(either)).toBe(factored);
    expect([ab, ac, either].map((literal) => network.isDead(literal >>> 1))).toEqual([
      false,
      true,
      true,
    ]);
    expect(network.leave(factored)).toBe(2);
  });
});

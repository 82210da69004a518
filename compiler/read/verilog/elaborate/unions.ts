/** Which nets of a module are one net: a union-find over the few that are joined. */
export class Unions {
  // Only nets that are joined to an older one have an entry, and most modules have none.
  #older: Map<number, number> | undefined;

  get isEmpty(): boolean {
    return this.#older === undefined;
  }

  /** The oldest net of those that a net is one with. */
  find(net: number): number {
    const older = this.#older;
    if (older === undefined) return net;
    let root = net;
    for (let next = older.get(root); next !== undefined; next = older.get(root)) {
      root = next;
    }
    // Path compression keeps later searches short.
    for (let at = net; at !== root; ) {
      const next = older.get(at)!;
      older.set(at, root);
      at = next;
    }
    return root;
  }

  /** Makes two nets one. */
  join(a: number, b: number): void {
    const rootA = this.find(a);
    const rootB = this.find(b);
    if (rootA === rootB) return;
    this.#older ??= new Map();
    this.#older.set(Math.max(rootA, rootB), Math.min(rootA, rootB));
  }
}

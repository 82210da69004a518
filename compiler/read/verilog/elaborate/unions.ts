/** Which nets of a module are one net: a union-find over the few that are joined. */
export class Unions {
  // Only nets that are joined to an older one have an entry, and most modules have none.
  readonly #older = new Map<number, number>();

  get isEmpty(): boolean {
    return this.#older.size === 0;
  }

  /** The oldest net of those that a net is one with. */
  find(net: number): number {
    if (this.#older.size === 0) return net;
    let root = net;
    for (let next = this.#older.get(root); next !== undefined; next = this.#older.get(root)) {
      root = next;
    }
    // Path compression keeps later searches short.
    for (let at = net; at !== root; ) {
      const next = this.#older.get(at)!;
      this.#older.set(at, root);
      at = next;
    }
    return root;
  }

  /** Makes two nets one. */
  join(a: number, b: number): void {
    const rootA = this.find(a);
    const rootB = this.find(b);
    if (rootA !== rootB) this.#older.set(Math.max(rootA, rootB), Math.min(rootA, rootB));
  }
}

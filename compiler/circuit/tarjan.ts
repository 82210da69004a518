/**
 * Strongly connected components after R. Tarjan, "Depth-first search and linear graph algorithms",
 * SIAM J. Computing 1(2), 1972, with an explicit stack.
 */
export class TarjanSearch {
  readonly #count: number;
  readonly #successor: (node: number, i: number) => number;
  readonly #number: Uint32Array;
  readonly #low: Uint32Array;
  readonly #onPath: Uint8Array;
  readonly #path: number[] = [];
  readonly #stack: number[] = [];
  readonly #progress: number[] = [];
  readonly #components: number[][] = [];
  #visited = 0;

  /** `successor` gives the i-th successor of a node 0 … count-1, or -1 past the last. */
  constructor(count: number, successor: (node: number, i: number) => number) {
    this.#count = count;
    this.#successor = successor;
    this.#number = new Uint32Array(count);
    this.#low = new Uint32Array(count);
    this.#onPath = new Uint8Array(count);
  }

  /** The components of more than one node, and nodes that are their own successor. */
  components(): readonly number[][] {
    for (let node = 0; node < this.#count; node++) {
      if (this.#number[node] === 0) this.#visit(node);
    }
    return this.#components;
  }

  #visit(root: number): void {
    this.#enter(root);
    while (this.#stack.length > 0) {
      const top = this.#stack.length - 1;
      const node = this.#stack[top]!;
      const next = this.#successor(node, this.#progress[top]!);
      if (next === -1) {
        this.#leave(node);
        continue;
      }
      this.#progress[top]!++;
      if (this.#number[next] === 0) this.#enter(next);
      else if (this.#onPath[next]) this.#lower(node, this.#number[next]!);
    }
  }

  #enter(node: number): void {
    this.#number[node] = ++this.#visited;
    this.#low[node] = this.#visited;
    this.#onPath[node] = 1;
    this.#path.push(node);
    this.#stack.push(node);
    this.#progress.push(0);
  }

  #leave(node: number): void {
    this.#stack.pop();
    this.#progress.pop();
    const parent = this.#stack[this.#stack.length - 1];
    if (parent !== undefined) this.#lower(parent, this.#low[node]!);
    if (this.#low[node] !== this.#number[node]) return;
    const isAlone = this.#path[this.#path.length - 1] === node;
    if (isAlone && !this.#succeedsItself(node)) {
      this.#onPath[this.#path.pop()!] = 0;
      return;
    }
    const component = this.#path.splice(this.#path.lastIndexOf(node));
    for (const member of component) this.#onPath[member] = 0;
    this.#components.push(component);
  }

  #lower(node: number, value: number): void {
    if (value < this.#low[node]!) this.#low[node] = value;
  }

  #succeedsItself(node: number): boolean {
    for (let i = 0, next = this.#successor(node, 0); next !== -1; ) {
      if (next === node) return true;
      next = this.#successor(node, ++i);
    }
    return false;
  }
}

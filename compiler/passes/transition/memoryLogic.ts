import { exists, sameAddress } from '../../circuit/addresses.js';
import type { Circuit } from '../../circuit/circuit.js';
import { NO_NET } from '../../circuit/ids.js';
import type { WritePort } from '../../circuit/memory.js';
import { memoryReads, memoryWrites, type PortOf } from '../../circuit/memoryPorts.js';
import { type Literal, type LogicWrite, TRUE } from '../../logic/logic.js';
import type { LogicBuilder } from '../../logic/logicBuilder.js';
import { type Algebra, mayBeOne, mayBeZero, type NetValue, pair } from './algebra.js';

/** What a write port has written in the course of a cycle. */
export interface PendingWrite {
  readonly memory: number;
  readonly enable: NetValue;
  readonly address: readonly NetValue[];
  readonly data: readonly NetValue[];
  readonly mask: readonly NetValue[] | undefined;
}

/**
 * The memories of a circuit as logic.
 *
 * Words are loaded as they were before the cycle. What has been written since is laid over them,
 * write by write, where the addresses are the same; that is logic, which vanishes where nobody
 * reads between an edge and the end of the cycle. Writes are carried out at its end.
 */
export class MemoryLogic {
  readonly #circuit: Circuit;
  readonly #algebra: Algebra;
  readonly #logic: LogicBuilder;
  readonly #writes: readonly PortOf<WritePort>[];

  constructor(circuit: Circuit, algebra: Algebra, logic: LogicBuilder) {
    this.#circuit = circuit;
    this.#algebra = algebra;
    this.#logic = logic;
    this.#writes = memoryWrites(circuit);
  }

  /** Number of write ports, which count from 0. */
  get writeCount(): number {
    return this.#writes.length;
  }

  /** The value of a net that a read port drives, after the writes given. */
  read(net: number, value: (net: number) => NetValue, writes: readonly PendingWrite[]): NetValue {
    const algebra = this.#algebra;
    const { ports, portOf, bitOf } = memoryReads(this.#circuit);
    const { memory, port } = ports[portOf[net]!]!;
    const { indices } = this.#circuit.memories[memory]!;
    const address = Array.from(port.address, value);
    const bit = bitOf[net]!;
    let result = this.#stored(memory, address, bit);
    const own = writes.filter((write) => write.memory === memory);
    if (own.length === 0) return result;
    const isThere = exists(algebra, indices, address);
    for (const write of own) {
      const isSame = algebra.and(isThere, sameAddress(algebra, write.address, address));
      const hit = algebra.and(write.enable, isSame);
      const written = write.mask === undefined ? hit : algebra.and(hit, write.mask[bit]!);
      result = algebra.mux(written, result, write.data[bit]!);
    }
    return result;
  }

  /**
   * What a write port does where `fired` is 1, by the values of before; undefined where that is
   * nothing for sure.
   */
  write(
    index: number,
    fired: NetValue,
    value: (net: number) => NetValue,
  ): PendingWrite | undefined {
    const { memory, port } = this.#writes[index]!;
    const enable = port.enable === NO_NET ? fired : this.#algebra.and(fired, value(port.enable));
    if (enable === this.#algebra.zero) return undefined;
    return {
      memory,
      enable,
      address: Array.from(port.address, value),
      data: Array.from(port.data, value),
      mask: port.mask && Array.from(port.mask, value),
    };
  }

  /** The writes of a whole cycle as they are carried out at its end. */
  carriedOut(writes: readonly PendingWrite[]): LogicWrite[] {
    return writes.map(({ memory, enable, address, data, mask = [] }) => {
      const [at, what] = [this.#planes(address), this.#planes(data)];
      return {
        memory,
        enable: this.#may(enable),
        surely: this.#surely(enable),
        address: at.ones,
        addressUnknown: at.unknown,
        data: what.ones,
        dataUnknown: what.unknown,
        mask: mask.map((each) => this.#may(each)),
        maskSurely: this.#algebra.hasUnknown ? mask.map((each) => this.#surely(each)) : [],
      };
    });
  }

  #stored(memory: number, address: readonly NetValue[], bit: number): NetValue {
    const logic = this.#logic;
    const number = logic.pack(address.map((each) => this.#may(each)));
    if (!this.#algebra.hasUnknown) return logic.bit(logic.load(memory, number, TRUE), bit);
    const { unknown } = this.#planes(address);
    const valid = unknown.reduce((all, each) => logic.and(all, each ^ 1), TRUE);
    const word = logic.load(memory, number, valid);
    const group = Math.ceil(this.#circuit.memories[memory]!.width / 8) * 8;
    // The first group of a word has 0 for an unknown bit, so "not 1" already means "may be 0".
    const one = logic.bit(word, bit);
    return pair(logic.or(one, logic.bit(word, group + bit)), one ^ 1);
  }

  #may(value: NetValue): Literal {
    return this.#algebra.hasUnknown ? mayBeOne(value) : value;
  }

  #surely(value: NetValue): Literal {
    return this.#algebra.hasUnknown ? mayBeZero(value) ^ 1 : value;
  }

  #planes(values: readonly NetValue[]): { ones: Literal[]; unknown: Literal[] } {
    if (!this.#algebra.hasUnknown) return { ones: [...values], unknown: [] };
    const logic = this.#logic;
    return {
      ones: values.map((value) => mayBeZero(value) ^ 1),
      unknown: values.map((value) => logic.and(mayBeOne(value), mayBeZero(value))),
    };
  }
}

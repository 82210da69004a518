import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { GrowableSmall, GrowableUint32 } from '../../compiler/circuit/growable.js';
import { dropSpare } from '../../compiler/circuit/numberLists.js';

const LISTS = 6;

const step = fc.record({
  list: fc.nat(LISTS - 1),
  kind: fc.constantFrom(
    'push',
    'extend',
    'append',
    'cut',
    'set',
    'reserve',
    'clear',
    'renew',
    'release',
  ),
  count: fc.oneof(fc.nat(20), fc.nat(1500)),
  value: fc.nat(0xffffffff),
});

describe('lists that grow', () => {
  it('keep what is theirs, short or long, though short ones share their room', () => {
    fc.assert(
      fc.property(fc.array(step, { maxLength: 60 }), (steps) => {
        const lists = Array.from({ length: LISTS }, () => new GrowableUint32(2));
        const models = lists.map((): number[] => []);
        for (const { list: number, kind, count, value } of steps) {
          const list = lists[number]!;
          const model = models[number]!;
          if (kind === 'push') {
            for (let i = 0; i < count; i++) list.push((value + i) >>> 0);
            for (let i = 0; i < count; i++) model.push((value + i) >>> 0);
          } else if (kind === 'extend') {
            list.extend(count, value);
            for (let i = 0; i < count; i++) model.push(value);
          } else if (kind === 'append') {
            const values = Uint32Array.from({ length: count }, (_, i) => value ^ i);
            list.append(values, count);
            model.push(...values);
          } else if (kind === 'cut') {
            list.cut(Math.min(count, model.length));
            model.length = Math.min(count, model.length);
          } else if (kind === 'set' && count < model.length) {
            list.set(count, value);
            model[count] = value;
          } else if (kind === 'reserve') list.reserve(count);
          else if (kind === 'clear') {
            list.clear();
            model.length = 0;
          } else if (kind === 'release') {
            list.release();
            model.length = 0;
          } else if (kind === 'renew') {
            expect([...list.take()]).toEqual(model);
            lists[number] = new GrowableUint32(count);
            model.length = 0;
          }
          for (const [i, each] of lists.entries()) {
            const entries = Array.from({ length: each.length }, (_, at) => each.get(at));
            expect(entries).toEqual(models[i]);
          }
        }
        dropSpare();
      }),
      { seed: 91, numRuns: 60 },
    );
  });

  it('hand out what no list changes any more', () => {
    const first = new GrowableUint32(4);
    first.push(1);
    const taken = first.take();
    const others = Array.from({ length: 100 }, () => new GrowableUint32(4));
    for (const other of others) for (let i = 0; i < 40; i++) other.push(7);
    expect([...taken]).toEqual([1]);
    expect(taken.buffer.byteLength).toBe(4);
  });

  it('keep small numbers in bytes, and large ones too', () => {
    const value = fc.oneof(fc.nat(255), fc.constantFrom(254, 255, 256, 65_535));
    fc.assert(
      fc.property(fc.array(value), fc.array(fc.tuple(fc.nat(30), value)), (values, changes) => {
        const list = new GrowableSmall(2);
        for (const each of values) list.push(each);
        const model = values.slice();
        for (const [index, each] of changes) {
          if (index >= model.length) continue;
          list.set(index, each);
          model[index] = each;
        }
        expect(model.map((_, index) => list.get(index))).toEqual(model);
        expect([...list.toUint16()]).toEqual(model);
      }),
      { seed: 255 },
    );
  });
});

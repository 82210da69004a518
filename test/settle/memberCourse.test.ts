import { describe, expect, it } from 'vitest';
import { MemberCourse } from '../../compiler/settle/memberCourse.js';

describe('the course of a set', () => {
  const course = new MemberCourse(4);
  const sets = [[0, 1, 3], [1, 3], [1, 2], [1, 2], []];
  sets.forEach((members, after) => {
    course.note(after, members);
  });

  it('has a step wherever the size changes', () => {
    expect(course.steps).toEqual([
      [0, 3],
      [1, 2],
      [4, 0],
    ]);
  });

  it('knows when each thing was in the set for the last time', () => {
    expect(Array.from(course.last)).toEqual([0, 3, 3, 1]);
    const empty = new MemberCourse(2);
    empty.note(0, [1]);
    expect(Array.from(empty.last)).toEqual([-1, 0]);
  });

  it('knows when the set last changed, also where its size did not', () => {
    expect(course.changedAfter).toBe(4);
    const exchange = new MemberCourse(2);
    exchange.note(0, [0]);
    expect(exchange.changedAfter).toBe(0);
    exchange.note(1, [1]);
    exchange.note(2, [1]);
    expect(exchange.changedAfter).toBe(1);
    expect(exchange.steps).toEqual([[0, 1]]);
  });
});

import { describe, expect, it } from 'vitest';
import { items, read } from './reading.js';

describe('specify blocks', () => {
  it('assign each delayed net of a timing check its signal, once', () => {
    expect(
      items(`
        specify
          $setuphold(posedge ck &&& (en == 1'b1), posedge d, 1:2:3, -0.1, note, , , ck_late, d_late);
          $setuphold(posedge ck, negedge d, (1), -0.1, note, (en), , ck_late, d_late);
          $recrem(posedge clr_n, posedge ck, 0.1, 0.2, note, , , clr_late, ck_late);
        endspecify`),
    ).toEqual(['assign ck_late=ck;', 'assign d_late=d;', 'assign clr_late=clr_n;']);
  });

  it('assign bits of vectors, and what an edge descriptor stands before', () => {
    expect(
      items(`
        specify
          $setuphold(edge [01, 0x] ck[1], d[3], 1, 1, , , , ck_late, d_late[3]);
          $setuphold(edge [01, 0x] ck[1], d[2], 1, 1, , , , ck_late, d_late[2]);
        endspecify`),
    ).toEqual(['assign ck_late=ck[1];', 'assign d_late[3]=d[3];', 'assign d_late[2]=d[2];']);
  });

  it('assign nothing where a check delays nothing', () => {
    expect(
      items(`
        specify
          $setuphold(posedge ck, d, 1, 1); $setuphold(posedge ck, d, 1, 1, note, , , , );
          $setup(d, posedge ck, 1, note); $width(posedge ck, 1, 0, note);
        endspecify`),
    ).toEqual([]);
  });

  it.each([
    ['$setuphold(', "'specify' the specify block has no 'endspecify'"],
    ['$recrem(posedge', "'specify' the specify block has no 'endspecify'"],
    ['$setuphold(c, d, 1, 1, , , , c_late, d_late', "has no 'endspecify'"],
  ])('that end within %s are reported', (text, problem) => {
    const { problems } = read(`module m; specify ${text}`);
    expect(problems[0]).toContain(problem);
  });
});

import type { Choices } from './choices.js';

const TOKEN =
  /\\\S+\s|"[^"]*"|`?[A-Za-z_$][\w$]*|'[sS]?[bodhBODH]|\d[\w?]*|[<>=!]==?=?|<<<?|>>>?|&&|\|\||~[&|^]|\^~|\*\*|[+-]:|=>|->|\(\*(?!\))|\*\)|\S/g;

/** The tokens of a text of ours, which has no comments; an escaped name has its blank with it. */
export const tokensOf = (text: string): string[] => text.match(TOKEN) ?? [];

const isOpen = (token: string): boolean => /^[()[\]{},;]$/.test(token);

const blanks = [
  ...[' ', ' ', ' ', ' ', '\n', '\t', '  ', '\r\n', '\f', ' /* a * b */ ', ' /**/'],
  ...[' // rest of a line `x "\n', '\n\n', ' /* (* `if\n */\n'],
];

/** The same tokens with other white space and comments between them. */
export function respaced(text: string, choices: Choices): string {
  let result = '';
  let isInAttribute = false;
  for (const token of tokensOf(text)) {
    const mayTouch = isOpen(token) || isOpen(result.at(-1) ?? ' ');
    const blank = choices.of('trivia', isInAttribute ? [' ', '\n', '\t'] : blanks);
    // `( *` may be written so, and `(*` begins an attribute.
    const isRisky = token.startsWith('*') || result.endsWith('\\');
    result += mayTouch && !isRisky && choices.pick('trivia', 2) === 1 ? '' : blank;
    result += token;
    if (token === '(*') isInAttribute = true;
    if (token === '*)') isInAttribute = false;
  }
  return `${result}\n`;
}

/** The same text with macros in place of some tokens, and text around that is left out. */
export function withMacros(text: string, choices: Choices): string {
  const definitions = ['`define Z_BOTH(a, b) a b', '`define Z_NOTHING'];
  const tokens = tokensOf(text).map((token) => {
    if (!/^[A-Za-z_0-9]/.test(token) || choices.pick('macros', 12) !== 11) return token;
    const name = `Z_M${definitions.length}`;
    const form = choices.pick('macros', 3);
    if (form === 1) return `\`Z_BOTH(${token}, \`Z_NOTHING )`;
    definitions.push(form === 2 ? `\`define ${name}(x) x` : `\`define ${name} ${token}`);
    return form === 2 ? `\`${name} ( ${token} )` : `\`${name} `;
  });
  const lines: string[] = [];
  let line: string[] = [];
  for (const token of tokens) {
    line.push(token);
    if (token !== ';' && token !== 'endmodule') continue;
    lines.push(line.join(' '));
    line = [];
    if (choices.rarely('macros', 10)) {
      lines.push(
        '`ifdef Z_UNKNOWN',
        'module (; "x',
        '`elsif Z_NOTHING',
        '`else',
        'endmodule',
        '`endif',
      );
    }
  }
  return `${definitions.join('\n')}\n${[...lines, line.join(' ')].join('\n')}\n`;
}

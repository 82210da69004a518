/** The least of 1, 2, 5, 10, … that makes at most `parts` of a range. */
export function tickStep(range: number, parts: number): number {
  for (let power = 1; ; power *= 10) {
    for (const step of [1, 2, 5]) if (range <= step * power * parts) return step * power;
  }
}

/** A coordinate without digits that nobody sees. */
export const round = (value: number): number => Math.round(value * 100) / 100;

/** A text as content of an element or attribute. */
export const escaped = (content: string): string =>
  content.replace(/[<>&"]/g, (character) => `&#${character.charCodeAt(0)};`);

import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

const css = readFileSync(new URL('../../../runtime/page/page.css', import.meta.url), 'utf8');
const [light, dark] = Array.from(css.matchAll(/:root \{([^}]*)\}/g), ([, body]) =>
  Object.fromEntries(Array.from(body!.matchAll(/--([\w-]+):\s*(#\w+);/g), ([, n, c]) => [n, c])),
) as Record<string, string>[];

/** Relative luminance as WCAG 2.2 defines it. */
function luminance(colour: string): number {
  const digits = colour.length === 4 ? colour.slice(1).replace(/./g, '$&$&') : colour.slice(1, 7);
  const [red, green, blue] = [0, 2, 4].map((at) => {
    const part = Number.parseInt(digits.slice(at, at + 2), 16) / 255;
    return part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * red! + 0.7152 * green! + 0.0722 * blue!;
}

function contrast(one: string, other: string): number {
  const [high, low] = [luminance(one), luminance(other)].sort((p, q) => q - p);
  return (high! + 0.05) / (low! + 0.05);
}

describe.each([
  ['light', light!],
  ['dark', dark!],
])('the %s colours of the page', (_, colours) => {
  // WCAG 2.2, success criteria 1.4.3 (text, 4.5) and 1.4.11 (parts of controls and pictures, 3).
  it.each([
    ['ink', 'ground', 4.5],
    ['ink', 'sheet', 4.5],
    ['quiet', 'ground', 4.5],
    ['alarm', 'ground', 4.5],
    ['on-press', 'press', 4.5],
    ['edge', 'ground', 3],
    ['wave', 'ground', 3],
    ['press', 'ground', 3],
  ])('tell %s from %s', (one, other, least) => {
    const colour = (name: string) => ({ ...light, ...colours })[name]!;
    expect(contrast(colour(one), colour(other))).toBeGreaterThanOrEqual(least);
  });
});

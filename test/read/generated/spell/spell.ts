import type { Design } from '../design/model.js';
import { Choices, type SpellingRecipe } from './choices.js';
import { helperText } from './helpers.js';
import { spellModule } from './modules.js';
import { respaced, withMacros } from './text.js';

/** A design as text: the files to be named, and those that they include, by path. */
export interface Spelling {
  readonly files: readonly (readonly [path: string, text: string])[];
  readonly included: ReadonlyMap<string, string>;
}

/** Writes a design as Verilog in one of its many spellings. */
export function spell({ modules, top }: Design, recipe: SpellingRecipe): Spelling {
  const choices = new Choices(recipe);
  const helpers = new Set<string>();
  const bodies = modules.map((module) => spellModule(module, choices, helpers));
  // Modules without an instance would be tops too.
  const used = modules.filter((module) => module === top || isUsed(modules, module.name));
  const texts = bodies.filter((_, i) => used.includes(modules[i]!));
  const all = [...texts, ...[...helpers].map(helperText)];
  const ordered = choices.pick('files', 2) === 1 ? all.toReversed() : all;
  return divided(
    ordered.map((text) => dressed(text, choices, recipe)),
    choices,
  );
}

function isUsed(modules: Design['modules'], name: string): boolean {
  const reached = new Set<string>();
  const visit = (module: Design['top']): void => {
    for (const item of module.items) {
      if (item.kind !== 'instance' || reached.has(item.module.name)) continue;
      reached.add(item.module.name);
      visit(item.module);
    }
  };
  visit(modules.at(-1)!);
  return reached.has(name);
}

function dressed(text: string, choices: Choices, { varies }: SpellingRecipe): string {
  // Directives keep their lines.
  if (text.includes('`')) return text;
  const macros = varies.includes('macros') && choices.pick('macros', 2) === 1;
  if (macros) return withMacros(text, choices);
  const isRespaced = varies.includes('trivia') && choices.pick('trivia', 2) === 1;
  return isRespaced ? respaced(text, choices) : text;
}

function divided(texts: readonly string[], choices: Choices): Spelling {
  const included = new Map<string, string>();
  const count = 1 + choices.pick('files', 3);
  const files = Array.from(
    { length: count },
    (_, i) => [`f${i}.v`, head(choices)] as [string, string],
  );
  for (const [i, text] of texts.entries()) {
    const file = files[choices.pick('files', count)]!;
    if (choices.rarely('files', 4)) {
      included.set(`part${i}.vh`, text);
      file[1] += `\n\`include "part${i}.vh"\n`;
    } else file[1] += `${text}\n`;
  }
  const ends = choices.of('files', [
    (text: string) => text,
    (text: string) => text.replaceAll('\n', '\r\n'),
  ]);
  return { files: files.map(([path, text]) => [path, ends(text)]), included };
}

function head(choices: Choices): string {
  return choices.of('files', [
    '',
    '`timescale 1ns / 1ps\n',
    '`resetall `default_nettype none\n`default_nettype wire\n',
    '\ufeff// with a byte order mark\n',
    '`begin_keywords "1364-2005"\n',
  ]);
}

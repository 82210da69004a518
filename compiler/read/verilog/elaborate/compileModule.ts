import type { ModuleSyntax } from '../syntax.js';
import { declareTargets, lowerAssigns, lowerProcesses } from './assigns.js';
import { ModuleBody } from './body.js';
import { complete } from './complete.js';
import { connectInstances } from './connecting.js';
import { refuseDelayLines } from './delayLines.js';
import type { Design } from './design.js';
import { NeedsRegisters } from './needsRegisters.js';
import type { Outer } from './outer.js';
import type { Overrides } from './overrides.js';
import { nameInstances, placeInstances } from './placing.js';
import { bindPorts } from './ports.js';
import { declareModule } from './scopes.js';
import type { Template } from './template.js';

/**
 * Compiles a module for one set of parameter values, and the modules it instantiates before.
 *
 * Large arrays are held as memories. One that turns out to be used as only registers can be is
 * built from these when the module is compiled once more.
 */
export function compileModule(
  design: Design,
  module: ModuleSyntax,
  overrides: Overrides,
  outer: Outer | undefined,
): Template {
  let { inRegisters } = design;
  for (;;) {
    try {
      return compileWith(new ModuleBody(design, module, outer, inRegisters), overrides);
    } catch (error) {
      if (!(error instanceof NeedsRegisters) || error.isFar) throw error;
      inRegisters = new Set([...inRegisters, error.position]);
    }
  }
}

function compileWith(body: ModuleBody, overrides: Overrides): Template {
  declareModule(body, overrides);
  nameInstances(body);
  const boundary = bindPorts(body);
  placeInstances(body, overrides.deep);
  declareTargets(body);
  connectInstances(body);
  lowerAssigns(body);
  lowerProcesses(body);
  refuseDelayLines(body);
  const template = complete(body, boundary);
  body.dropWork();
  return template;
}

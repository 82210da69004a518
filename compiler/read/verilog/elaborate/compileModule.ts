import type { ModuleSyntax } from '../syntax.js';
import { declareTargets, lowerAssigns, lowerProcesses } from './assigns.js';
import { ModuleBody } from './body.js';
import { complete } from './complete.js';
import { connectInstances } from './connecting.js';
import type { Design } from './design.js';
import type { Outer } from './outer.js';
import type { Overrides } from './overrides.js';
import { nameInstances, placeInstances } from './placing.js';
import { bindPorts } from './ports.js';
import { declareModule } from './scopes.js';
import type { Template } from './template.js';

/** Compiles a module for one set of parameter values, and the modules it instantiates before. */
export function compileModule(
  design: Design,
  module: ModuleSyntax,
  overrides: Overrides,
  outer: Outer | undefined,
): Template {
  const body = new ModuleBody(design, module, outer);
  declareModule(body, overrides);
  nameInstances(body);
  const boundary = bindPorts(body);
  placeInstances(body, overrides.deep);
  declareTargets(body);
  connectInstances(body);
  lowerAssigns(body);
  lowerProcesses(body);
  return complete(body, boundary);
}

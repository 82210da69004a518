export { RunFault } from '../../engine.js';
export { identity } from '../identity.js';
export { valueText } from '../nets.js';
export { compile } from '../source.js';
export { Lanes as Model } from './lanes.js';
export { load } from './load.js';

import type { LaneCount } from '../laneLayout.js';

/** What `model.mjs` knows of the package that it is part of. */
export interface PackageIdentity {
  /** Name of the top module. */
  readonly name: string;
  /** SHA-256 of `model.wasm`, in hexadecimal. */
  readonly sha256: string;
  /** Fingerprint of what was compiled; packages of the same netlist have the same. */
  readonly netlist: string;
  readonly threeValued: boolean;
  /** Independent sequences that run side by side. */
  readonly lanes: 1 | LaneCount;
}

/** Stands in front of the bundled text in every package. */
declare const CLOCKSTRIDE_PACKAGE: PackageIdentity;

/** The identity of the package that this module was written for. */
export const identity: PackageIdentity = CLOCKSTRIDE_PACKAGE;

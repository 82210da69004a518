import type { Literal, LogicWrite } from './logic.js';

/** All literals, or values of a program, that a write depends on. */
export function writeLiterals(write: LogicWrite): Literal[] {
  const { enable, surely } = write;
  return [enable, surely, ...columns(write).flat()];
}

/** The write with other literals in place of its own. */
export function mapWrite(write: LogicWrite, by: (literal: Literal) => Literal): LogicWrite {
  return {
    memory: write.memory,
    enable: by(write.enable),
    surely: by(write.surely),
    address: write.address.map(by),
    addressUnknown: write.addressUnknown.map(by),
    data: write.data.map(by),
    dataUnknown: write.dataUnknown.map(by),
    mask: write.mask.map(by),
    maskSurely: write.maskSurely.map(by),
  };
}

const columns = (write: LogicWrite): (readonly Literal[])[] => [
  write.address,
  write.addressUnknown,
  write.data,
  write.dataUnknown,
  write.mask,
  write.maskSurely,
];

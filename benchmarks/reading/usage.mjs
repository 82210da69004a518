// Loaded before a program that is measured: writes, when it ends, what it has used to the file
// descriptor 3, as JSON.

import { writeSync } from 'node:fs';

process.on('exit', () => {
  const { userCPUTime, systemCPUTime, maxRSS } = process.resourceUsage();
  const used = {
    seconds: process.uptime(),
    processorSeconds: (userCPUTime + systemCPUTime) / 1e6,
    peakBytes: maxRSS * 1024,
  };
  writeSync(3, JSON.stringify(used));
});

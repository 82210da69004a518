import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

const own = (path: string): string => fileURLToPath(new URL(`../../${path}`, import.meta.url));

/** The demo's page, where `npm run demo` writes it. */
export const demoPage = own('dist/demo/sorter.html');

/** Runs the tool in a folder, as a user would, and shows what it says; returns its exit status. */
export function clockstride(folder: string, given: readonly string[]): number | null {
  const command = own('dist/compiler/cli/main.js');
  const { status } = spawnSync(process.execPath, [command, ...given], {
    cwd: folder,
    stdio: 'inherit',
  });
  return status;
}

/** What makes a page of `sorter.v`, in which one can look at what the service timer decides by. */
export const packOptions = (page: string): readonly string[] => [
  'pack',
  'sorter.v',
  ...['--keep-names', 'service.compare_reached'],
  ...['--keep-names', 'service.service_over'],
  ...['--page', page],
];

/** The cycle in which the belt is about to start after its fourth service. */
export const BEFORE_FAULT = 1_041_000;

/**
 * Tools a check may need beyond Node. Where one is missing the check is skipped, and says so loudly; CI installs
 * them all and fails on a skip.
 */
import { spawnSync } from 'node:child_process';

/** Path of the first of a few commands that runs, or undefined with a loud line. */
export function commandOrSkip(
  check: string,
  ...candidates: (readonly [command: string, ...args: string[]])[]
): string | undefined {
  for (const [command, ...args] of candidates) {
    if (spawnSync(command, args, { stdio: 'ignore' }).status === 0) return command;
  }
  const names = candidates.map(([command]) => command).join(' or ');
  process.stderr.write(`\nSKIPPED: ${check} needs ${names}, which is not on this machine.\n`);
  return undefined;
}

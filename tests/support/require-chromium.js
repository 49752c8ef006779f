/**
 * The journeys need the system's Chromium. Where it is missing: as root with CI=true (or
 * INSTALL_CHROMIUM=1) it is installed with the system's packages; otherwise this ends with the command
 * to run. It never lets the tests run without it.
 */
import { execFileSync, spawnSync } from 'node:child_process';

function found() {
  return spawnSync('chromium', ['--version'], { stdio: 'ignore' }).status === 0;
}

if (!found()) {
  const wanted = process.env.CI === 'true' || process.env.INSTALL_CHROMIUM === '1';
  if (wanted && process.getuid?.() === 0) {
    const apt = (...args) =>
      execFileSync('apt-get', ['-o', 'DPkg::Lock::Timeout=120', ...args], {
        stdio: ['ignore', 'inherit', 'inherit'],
        env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
      });
    apt('update', '-qq');
    apt('install', '-y', '-qq', '--no-install-recommends', 'chromium');
  }
  if (!found()) {
    console.error(
      'The journeys need Chromium. Install it and run the tests again:\n' +
        '  sudo apt-get update && sudo apt-get install -y chromium\n' +
        '(as root, INSTALL_CHROMIUM=1 npm test installs it by itself)',
    );
    process.exit(1);
  }
}

// Finds the browser for the tests, or installs the system's package.
import { spawnSync } from 'node:child_process';
import { accessSync, constants } from 'node:fs';
import path from 'node:path';

/** Path of an executable Chromium: CHROMIUM_PATH, else one on PATH, else null. */
export function findChromium() {
  const given = process.env.CHROMIUM_PATH;
  const names = ['chromium', 'chromium-browser', 'google-chrome'];
  const candidates = [
    ...(given ? [given] : []),
    ...(process.env.PATH ?? '').split(path.delimiter).flatMap((folder) => names.map((name) => path.join(folder, name))),
  ];
  return candidates.find(isExecutable) ?? null;
}

function isExecutable(file) {
  try {
    accessSync(file, constants.X_OK);
    return true;
  } catch {
    return false;
  }
}

/** Installs Debian's package where this is root on a system with apt; ends with a sentence where it cannot. */
export function installChromium() {
  const isRoot = process.getuid?.() === 0;
  if (isRoot && isExecutable('/usr/bin/apt-get')) {
    process.stdout.write('Installing the chromium package for the browser tests …\n');
    const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
    spawnSync('apt-get', ['update', '-qq'], { stdio: 'inherit', env });
    spawnSync('apt-get', ['install', '-y', '-qq', '--no-install-recommends', 'chromium'], {
      stdio: ['ignore', 'ignore', 'inherit'],
      env,
    });
    const found = findChromium();
    if (found) return found;
  }
  process.stderr.write(
    'The browser tests need Chromium, and it could not be installed from here. Install the chromium package, or set CHROMIUM_PATH.\n',
  );
  process.exit(1);
}

import {spawnSync} from 'node:child_process';
import {existsSync} from 'node:fs';

const PLACES = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'];

/** A Chromium for the browser tests: the one that is there, or Debian's, installed if that is possible. */
export function findOrInstallChromium(): string | null {
  const found = find();
  if (found) return found;
  if (process.getuid?.() === 0 && existsSync('/usr/bin/apt-get')) {
    process.stdout.write('No Chromium was found; installing the package "chromium".\n');
    const options = {
      stdio: 'inherit',
      env: {...process.env, DEBIAN_FRONTEND: 'noninteractive'},
    } as const;
    spawnSync('apt-get', ['update', '-qq'], options);
    spawnSync('apt-get', ['install', '-y', '-qq', 'chromium'], options);
  }
  const installed = find();
  if (!installed) {
    process.stdout.write(
      'No Chromium was found and none could be installed, so the browser tests will fail.\n' +
        'Install one (Debian: apt-get install chromium) or name yours in CHROME_BIN.\n',
    );
  }
  return installed;
}

function find(): string | null {
  const named = process.env['CHROME_BIN'];
  return [...(named ? [named] : []), ...PLACES].find(path => existsSync(path)) ?? null;
}

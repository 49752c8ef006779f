import { readFileSync } from 'node:fs';

/** The package's version, found from source and from the build alike. */
function readVersion(): string {
  for (const path of ['../package.json', '../../package.json']) {
    try {
      const { name, version } = JSON.parse(readFileSync(new URL(path, import.meta.url), 'utf8')) as Record<
        string,
        unknown
      >;
      if (name === 'shoalmark' && typeof version === 'string') return version;
    } catch {
      // Not there: the other place is.
    }
  }
  throw new Error('package.json of shoalmark was not found beside the server');
}

export const softwareVersion = readVersion();

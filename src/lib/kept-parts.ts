interface Part {
  file: string;
  isEntry?: boolean;
  imports?: string[];
  dynamicImports?: string[];
  css?: string[];
}

/** A page without the marks that are new in every reply. */
export function withoutNonce(page: string): string {
  return page.replaceAll(/ nonce="[^"]*"/g, '');
}

/** The addresses of assets that a page names itself. */
export function addressesOf(page: string): string[] {
  return [...page.matchAll(/(?:src|href)="(\/assets\/[^"]+)"/g)].map(([, address]) => address);
}

/**
 * The addresses of all files that sources need, by the build's own list of its parts, with what they load later, when it is
 * asked for. What the entry loads later is every other page, and stays away.
 */
export function partsBehind(manifest: unknown, sources: readonly string[]): string[] {
  const parts = manifest as Record<string, Part | undefined>;
  const found = new Set<string>();
  const seen = new Set<string>();
  const follow = (name: string) => {
    const part = parts[name];
    if (!part || seen.has(name)) return;
    seen.add(name);
    for (const file of [part.file, ...(part.css ?? [])]) found.add(`/${file}`);
    for (const next of part.imports ?? []) follow(next);
    if (!part.isEntry) for (const next of part.dynamicImports ?? []) follow(next);
  };
  for (const source of sources) follow(source);
  return [...found];
}

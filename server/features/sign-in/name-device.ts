// What browsers send, most particular first: those built on another's engine name that one too.
const browsers: [RegExp, string][] = [
  [/\bEdgA?\//, 'Edge'],
  [/\bOPR\//, 'Opera'],
  [/\b(Firefox|FxiOS)\//, 'Firefox'],
  [/\b(Chrome|CriOS|Chromium)\//, 'Chrome'],
  [/\bSafari\//, 'Safari'],
];
const systems: [RegExp, string][] = [
  [/\b(iPhone|iPad)\b/, 'an iPhone or iPad'],
  [/\bAndroid\b/, 'Android'],
  [/\bWindows\b/, 'Windows'],
  [/\bMac OS X\b/, 'a Mac'],
  [/\bCrOS\b/, 'ChromeOS'],
  [/\bLinux\b/, 'Linux'],
];

/** A browser and its system in words, from its User-Agent header; good enough for a person to know their own again. */
export function nameDevice(userAgent: string | undefined): string {
  const named = (list: [RegExp, string][]) => list.find(([pattern]) => pattern.test(userAgent ?? ''))?.[1];
  const browser = named(browsers) ?? 'A browser';
  const system = named(systems);
  return system === undefined ? browser : `${browser} on ${system}`;
}

import { describe, expect, it } from 'vitest';
import { addressesOf, partsBehind, withoutNonce } from '../../../src/lib/kept-parts.ts';

const page = (nonce: string) =>
  `<link rel="preload" href="/assets/sans-1.woff2" nonce="${nonce}"><script nonce="${nonce}">x</script>` +
  `<script type="module" nonce="${nonce}" src="/assets/index-2.js"></script><link rel="icon" href="/favicon.svg">` +
  `<meta property="csp-nonce" nonce="${nonce}">`;

describe('what the service worker keeps', () => {
  it('takes two pages that differ in their nonce alone for the same', () => {
    expect(withoutNonce(page('a1'))).toBe(withoutNonce(page('b2')));
    expect(withoutNonce(page('a1'))).not.toBe(withoutNonce(page('a1').replace('index-2', 'index-3')));
    expect(withoutNonce(page('a1'))).not.toContain('a1');
  });

  it('is what the page names, and everything that the pages need, each once', () => {
    expect(addressesOf(page('a1'))).toEqual(['/assets/sans-1.woff2', '/assets/index-2.js']);
    const manifest = {
      'index.html': {
        file: 'assets/index-2.js',
        isEntry: true,
        css: ['assets/index-2.css'],
        dynamicImports: ['src/pages/TonightPage.tsx', 'src/pages/WhatIfPage.tsx'],
      },
      'src/pages/TonightPage.tsx': { file: 'assets/tonight.js', imports: ['index.html', '_board.js'] },
      'src/pages/HandoverPage.tsx': {
        file: 'assets/handover.js',
        imports: ['_board.js'],
        css: ['assets/handover.css'],
      },
      // Parts may import each other.
      '_board.js': {
        file: 'assets/board.js',
        imports: ['_format.js'],
        // Opened by a press on Tonight: without the server as well.
        dynamicImports: ['src/features/outlook/BedMeeting.tsx'],
      },
      'src/features/outlook/BedMeeting.tsx': { file: 'assets/meeting.js', imports: ['_format.js'] },
      '_format.js': { file: 'assets/format.js', imports: ['_board.js'] },
      'src/pages/WhatIfPage.tsx': { file: 'assets/what-if.js' },
    };
    expect(
      partsBehind(manifest, ['src/pages/TonightPage.tsx', 'src/pages/HandoverPage.tsx', 'src/pages/Gone.tsx']),
    ).toEqual([
      '/assets/tonight.js',
      '/assets/index-2.js',
      '/assets/index-2.css',
      '/assets/board.js',
      '/assets/format.js',
      '/assets/meeting.js',
      '/assets/handover.js',
      '/assets/handover.css',
    ]);
  });
});

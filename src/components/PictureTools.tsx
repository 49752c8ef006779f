import { useState } from 'react';
import type { RefObject } from 'react';
import { fileCautions, fileNameOf } from '../lib/file-cautions.ts';
import { saveFile } from '../lib/save-file.ts';

const quiet = 'link min-h-6 cursor-pointer font-semibold';

/**
 * Saves a drawing as it stands on the page: SVG to print and edit, PNG to paste, and its figures as CSV. The cautions stand
 * at the foot of the picture, since it travels without its page.
 */
export function PictureTools({
  of,
  title,
  csv,
}: {
  /** The part of the page that is drawn. */
  of: RefObject<HTMLElement | null>;
  /** Stands over the picture: what it shows, and of which site. */
  title: string;
  /** Its figures: file names and, when pressed, their text. */
  csv?: readonly { label?: string; fileName: string; text: () => string }[];
}) {
  const [said, setSaid] = useState('');

  async function save(kind: 'svg' | 'png') {
    if (!of.current) return;
    setSaid('');
    try {
      // Few people save pictures: what draws them comes when it is asked for.
      const [{ pictureOf }, { pngOf }] = await Promise.all([
        import('../lib/picture-of.ts'),
        import('../lib/png-of.ts'),
      ]);
      const picture = pictureOf(of.current, title, [`${document.title}.`, fileCautions.slice(0, 2).join(' ')]);
      const name = `${fileNameOf(title)}.${kind}`;
      if (kind === 'svg') saveFile(name, 'image/svg+xml', [picture.svg]);
      else saveFile(name, 'image/png', [await pngOf(picture)]);
      setSaid('Saved among your downloads.');
    } catch {
      setSaid('This browser could not draw the picture. Print the page or take the CSV instead.');
    }
  }

  return (
    <p className="flex flex-wrap items-center gap-x-4 gap-y-1 text-quiet text-ink2 print:hidden">
      <span className="flex gap-x-3">
        Save the picture:
        <button type="button" className={quiet} aria-label={`SVG, ${title}`} onClick={() => void save('svg')}>
          SVG
        </button>
        <button type="button" className={quiet} aria-label={`PNG, ${title}`} onClick={() => void save('png')}>
          PNG
        </button>
      </span>
      {csv && csv.length > 0 ? (
        <span className="flex flex-wrap gap-x-3">
          the figures:
          {csv.map(({ label = 'CSV', fileName, text }) => (
            <button
              key={fileName}
              type="button"
              className={quiet}
              aria-label={`${label}, ${title}`}
              onClick={() => saveFile(fileName, 'text/csv', [text()])}
            >
              {label}
            </button>
          ))}
        </span>
      ) : null}
      <span role="status">{said}</span>
    </p>
  );
}

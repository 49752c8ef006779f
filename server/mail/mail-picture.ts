import { Resvg } from '@resvg/resvg-js';
import type { ReactElement } from 'react';
import { renderToStaticMarkup } from 'react-dom/server';
import { withMailFonts } from './mail-fonts.ts';

/** The day theme's colours by the names that drawings use: a picture in a mail cannot follow the reader's theme. */
export const mailColours = {
  water: '#E6EDEF',
  paper: '#F7FAFA',
  ink: '#11232C',
  ink2: '#374C56',
  ink3: '#51656F',
  hair: '#C4D0D4',
  edge: '#71848D',
  act: '#0D5875',
  g1: '#B59C63',
  r1: '#EBEDE4',
  r2: '#E8CB8B',
  r3: '#DB9340',
  r4: '#AF4824',
  r5: '#5A1420',
  r1i: '#3F4F52',
  r2i: '#11232C',
  r3i: '#11232C',
  r4i: '#FFFFFF',
  r5i: '#FFFFFF',
  s2: '#862C22',
  f1: '#5A8FA6',
  f2: '#8FB5C5',
  f3: '#BBD2DC',
} as const;

/** A picture that travels with a message. */
export interface MailPicture {
  cid: string;
  contentType: 'image/png';
  /** Base64. */
  content: string;
  /** CSS pixels. */
  width: number;
  height: number;
}

/**
 * Draws one of the product's own drawings as PNG, twice as fine as it is shown.
 * @param drawing an SVG element; its colours are taken from the day theme, its text is set in Nunito Sans
 * @throws RangeError naming a colour that mail does not know
 */
export function drawMailPicture(cid: string, drawing: ReactElement, background: string | null): MailPicture {
  const svg = renderToStaticMarkup(drawing)
    .replace('<svg ', '<svg xmlns="http://www.w3.org/2000/svg" ')
    .replace(/var\(--([\w-]+)\)/g, (_, name: string) => {
      if (!(name in mailColours)) throw new RangeError(`mail has no colour ${name}`);
      return mailColours[name as keyof typeof mailColours];
    });
  return withMailFonts((fontFiles) => {
    const image = new Resvg(svg, {
      fitTo: { mode: 'zoom', value: 2 },
      ...(background === null ? {} : { background }),
      font: { fontFiles, loadSystemFonts: false, defaultFontFamily: 'Nunito Sans' },
    }).render();
    return {
      cid,
      contentType: 'image/png',
      content: image.asPng().toString('base64'),
      width: image.width / 2,
      height: image.height / 2,
    };
  });
}

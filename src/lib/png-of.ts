import fontFile from '@fontsource-variable/nunito-sans/files/nunito-sans-latin-full-normal.woff2?url';
import type { Picture } from './picture-of.ts';

async function fontData(): Promise<string> {
  const bytes = new Uint8Array(await (await fetch(fontFile)).arrayBuffer());
  let text = '';
  for (let at = 0; at < bytes.length; at += 8192) text += String.fromCharCode(...bytes.subarray(at, at + 8192));
  return `data:font/woff2;base64,${btoa(text)}`;
}

/** The picture in dots, twice as fine as the screen's own measure. */
export async function pngOf({ svg, width, height }: Picture): Promise<Blob> {
  const image = new Image();
  // A picture in a picture loads nothing: its type goes with it.
  const style = `<style>@font-face{font-family:'Nunito Sans Variable';font-weight:200 1000;font-stretch:75% 125%;src:url(${await fontData()})}</style>`;
  const whole = svg.replace(/>/, () => `>${style}`);
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(whole)}`;
  await image.decode();
  const canvas = document.createElement('canvas');
  canvas.width = width * 2;
  canvas.height = height * 2;
  const context = canvas.getContext('2d');
  if (!context) throw new Error('This browser draws no pictures.');
  context.drawImage(image, 0, 0, canvas.width, canvas.height);
  return await new Promise((resolve, reject) => {
    canvas.toBlob((blob) => {
      if (blob) resolve(blob);
      else reject(new Error('The picture is too large for this browser.'));
    }, 'image/png');
  });
}

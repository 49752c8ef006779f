/** What a drawn shape or text needs, once no style sheet stands behind it. */
const drawn = [
  'fill',
  'fill-opacity',
  'stroke',
  'stroke-width',
  'stroke-dasharray',
  'stroke-linecap',
  'stroke-linejoin',
  'stroke-opacity',
  'opacity',
  'paint-order',
  'font-size',
  'font-weight',
  'font-stretch',
  'letter-spacing',
  'text-anchor',
  'dominant-baseline',
  'stop-color',
  'stop-opacity',
] as const;
const svgName = 'http://www.w3.org/2000/svg';
const face = "'Nunito Sans Variable', 'Nunito Sans', Arial, sans-serif";
const edges = ['Top', 'Right', 'Bottom', 'Left'] as const;

const round = (value: number) => String(Math.round(value * 100) / 100);
const isClear = (colour: string) => colour === 'transparent' || /, 0\)$/.test(colour);

function make(name: string, attributes: Record<string, string>): SVGElement {
  const element = document.createElementNS(svgName, name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value);
  return element;
}

/** A copy of a drawing with the styles that it has on the page written into it. */
function copyDrawing(svg: Element, box: DOMRect, originX: number, originY: number): Element {
  const copy = svg.cloneNode(true) as Element;
  const sources = [svg, ...svg.querySelectorAll('*')];
  const targets = [copy, ...copy.querySelectorAll('*')];
  sources.forEach((source, index) => {
    const target = targets[index];
    const style = getComputedStyle(source);
    for (const name of drawn) {
      const value = style.getPropertyValue(name);
      if (value !== '' && value !== 'none' && value !== 'normal' && value !== 'auto') target.setAttribute(name, value);
      else if (target.hasAttribute(name) && value === 'none') target.setAttribute(name, value);
    }
    if (style.fill === 'none') target.setAttribute('fill', 'none');
    target.removeAttribute('class');
    target.removeAttribute('style');
    target.removeAttribute('aria-hidden');
  });
  copy.setAttribute('x', round(box.left - originX));
  copy.setAttribute('y', round(box.top - originY));
  copy.setAttribute('width', round(box.width));
  copy.setAttribute('height', round(box.height));
  return copy;
}

/** Out of sight on the page: for screen readers only, closed, or left out of pictures. */
function isUnseen(element: Element, style: CSSStyleDeclaration, box: DOMRect): boolean {
  if (style.visibility === 'hidden' || (element instanceof HTMLElement && element.dataset.picture === 'none'))
    return true;
  // What is pressed is no part of a picture, as it is none of a print.
  if (element.classList.contains('print:hidden')) return true;
  return style.display !== 'contents' && (box.width <= 1 || box.height <= 1) && style.position === 'absolute';
}

function drawBox(style: CSSStyleDeclaration, box: DOMRect, into: Element, x: number, y: number) {
  if (!isClear(style.backgroundColor)) {
    into.append(
      make('rect', {
        x: round(box.left - x),
        y: round(box.top - y),
        width: round(box.width),
        height: round(box.height),
        fill: style.backgroundColor,
      }),
    );
  }
  for (const edge of edges) {
    const width = Number.parseFloat(style[`border${edge}Width`]);
    const colour = style[`border${edge}Color`];
    if (!(width > 0) || style[`border${edge}Style`] === 'none' || isClear(colour)) continue;
    const lying = edge === 'Top' || edge === 'Bottom';
    into.append(
      make('rect', {
        x: round((edge === 'Right' ? box.right - width : box.left) - x),
        y: round((edge === 'Bottom' ? box.bottom - width : box.top) - y),
        width: round(lying ? box.width : width),
        height: round(lying ? width : box.height),
        fill: colour,
      }),
    );
  }
}

/** Text of one node, a line at a time as the page breaks it. */
function drawText(node: Text, style: CSSStyleDeclaration, into: Element, x: number, y: number) {
  const range = document.createRange();
  let line = '';
  let lineBox: DOMRect | null = null;
  const size = Number.parseFloat(style.fontSize);
  const flush = () => {
    if (lineBox && line.trim() !== '') {
      const text = make('text', {
        x: round(lineBox.left - x),
        // The baseline of Nunito Sans within its line box.
        y: round(lineBox.top - y + lineBox.height / 2 + size * 0.355),
        fill: style.color,
        'font-size': style.fontSize,
        'font-weight': style.fontWeight,
        'font-stretch': style.fontStretch,
      });
      text.textContent = line;
      into.append(text);
    }
    line = '';
    lineBox = null;
  };
  for (let index = 0; index < node.data.length; index += 1) {
    range.setStart(node, index);
    range.setEnd(node, index + 1);
    const box = range.getClientRects().item(0);
    if (!box) continue;
    // What begins with a space is set further on; a picture's text would lose the space and its place.
    if (line === '' && node.data[index].trim() === '') continue;
    if (lineBox && Math.abs(box.top - lineBox.top) > size / 2) flush();
    lineBox ??= box;
    line += node.data[index];
  }
  flush();
}

function walk(element: Element, into: Element, x: number, y: number): void {
  const style = getComputedStyle(element);
  if (style.display === 'none') return;
  const box = element.getBoundingClientRect();
  if (isUnseen(element, style, box)) return;
  if (element instanceof SVGElement) {
    into.append(copyDrawing(element, box, x, y));
    return;
  }
  drawBox(style, box, into, x, y);
  if (element instanceof HTMLInputElement || element instanceof HTMLSelectElement) {
    const text = make('text', {
      x: round(box.left + box.width / 2 - x),
      y: round(box.top + box.height / 2 + Number.parseFloat(style.fontSize) * 0.355 - y),
      fill: style.color,
      'font-size': style.fontSize,
      'font-weight': style.fontWeight,
      'text-anchor': 'middle',
    });
    text.textContent = element instanceof HTMLInputElement ? element.value : (element.selectedOptions[0]?.text ?? '');
    into.append(text);
    return;
  }
  // What stands above others is drawn after them, as on the page.
  const layer = (child: ChildNode) =>
    child instanceof Element ? Number.parseInt(getComputedStyle(child).zIndex, 10) || 0 : 0;
  const children = [...element.childNodes].map((child, order) => ({ child, order, layer: layer(child) }));
  children.sort((a, b) => a.layer - b.layer || a.order - b.order);
  for (const { child } of children) {
    if (child instanceof Text) drawText(child, style, into, x, y);
    else if (child instanceof Element) walk(child, into, x, y);
  }
}

export interface Picture {
  svg: string;
  width: number;
  height: number;
}

/**
 * A part of the page as a picture of its own (SVG 1.1, text as text): drawings, tables and words as they stand on the
 * page in its present width and theme, under a title and above a note.
 * @param note lines at the foot: whose figures, and the cautions that go with them
 */
export function pictureOf(element: HTMLElement, title: string, note: readonly string[]): Picture {
  const pad = 20;
  const head = 44;
  const page = getComputedStyle(document.documentElement);
  const ink = page.getPropertyValue('--ink').trim();
  const ink2 = page.getPropertyValue('--ink2').trim();
  const box = element.getBoundingClientRect();
  const width = Math.max(480, Math.ceil(box.width)) + pad * 2;
  const perLine = Math.floor((width - pad * 2) / 6.4);
  const lines = note.flatMap((text) => wrap(text, perLine));
  const height = head + Math.ceil(box.height) + lines.length * 17 + pad * 2;
  const root = make('svg', {
    xmlns: svgName,
    width: String(width),
    height: String(height),
    viewBox: `0 0 ${String(width)} ${String(height)}`,
    'font-family': face,
  });
  root.append(make('rect', { width: '100%', height: '100%', fill: page.getPropertyValue('--water').trim() }));
  const say = (text: string, y: number, size: number, weight: number, fill: string) => {
    const line = make('text', {
      x: String(pad),
      y: String(y),
      'font-size': String(size),
      'font-weight': String(weight),
      fill,
    });
    line.textContent = text;
    root.append(line);
  };
  say(title, 30, 19, 800, ink);
  // Cut as the page cuts what slides beneath its edge.
  const clip = make('clipPath', { id: 'page' });
  clip.append(make('rect', { width: round(box.width), height: round(box.height) }));
  const body = make('g', { transform: `translate(${String(pad)} ${String(head)})`, 'clip-path': 'url(#page)' });
  walk(element, body, box.left, box.top);
  root.append(clip, body);
  lines.forEach((text, index) => say(text, head + Math.ceil(box.height) + pad + 6 + index * 17, 13, 550, ink2));
  return { svg: new XMLSerializer().serializeToString(root), width, height };
}

function wrap(text: string, perLine: number): string[] {
  const lines = [''];
  for (const word of text.split(' ')) {
    const last = lines[lines.length - 1];
    if (last.length + word.length + 1 > perLine && last !== '') lines.push(word);
    else lines[lines.length - 1] = last === '' ? word : `${last} ${word}`;
  }
  return lines;
}

import { isValidElement, type ReactNode } from 'react';
import { formatChance } from '../../shared/domain/risk-word.ts';
import { Button } from './Button.tsx';

/** What is pressed or filled in, and what is drawn, is no part of a cell's words. */
const wordless: ReadonlySet<unknown> = new Set(['button', 'input', 'select', 'textarea', 'svg', 'dialog', Button]);
const blocks: ReadonlySet<unknown> = new Set(['div', 'p', 'li', 'ul', 'ol', 'dl', 'dt', 'dd', 'br']);

function read(node: ReactNode): string {
  if (typeof node === 'string' || typeof node === 'number' || typeof node === 'bigint') return String(node);
  if (Array.isArray(node)) return (node as ReactNode[]).map(read).join('');
  if (!isValidElement<{ children?: ReactNode; chance?: unknown; 'aria-hidden'?: unknown }>(node)) return '';
  if (wordless.has(node.type)) return '';
  const { children, chance, 'aria-hidden': hidden } = node.props;
  // What only the eye sees has its words beside it.
  if (hidden === true || hidden === 'true') return '';
  // A figure that a component prints.
  if (children === undefined && typeof chance === 'number') return formatChance(chance);
  const text = read(children);
  return blocks.has(node.type) ? ` ${text} ` : text;
}

/** The words that a cell shows, as one line: without buttons, fields, drawings and what is hidden from screen readers. */
export function nodeText(node: ReactNode): string {
  return read(node).replaceAll(/\s+/g, ' ').trim();
}

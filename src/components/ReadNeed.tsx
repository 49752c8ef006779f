import type { ReactNode } from 'react';
import type { NeedColumn } from '../../shared/charts/need-columns.ts';
import { formatNumber, formatTime } from '../lib/format.ts';
import { ChartReader, type Reading } from './ChartReader.tsx';

function sayColumn(column: NeedColumn, unit: string): string {
  if (column.kind === 'past') {
    return column.present === null ? 'not counted' : `${formatNumber(column.present)} present`;
  }
  const { p5, p50, p90, p95, staffed, actual } = column;
  const gap = Math.ceil(p90) - staffed;
  return [
    `need ${formatNumber(p50)}, 90\u00a0% range ${formatNumber(p5)} to ${formatNumber(p95)}`,
    `P90 ${formatNumber(p90)}`,
    `${formatNumber(staffed)} ${unit}${gap > 0 ? `, ${formatNumber(gap)} fewer than P90` : ''}`,
    ...(actual === undefined || actual === null ? [] : [`${formatNumber(actual)} were there`]),
  ].join('; ');
}

/** The drawing of need over its hours or shifts, read column by column. */
export function ReadNeed({
  label,
  columns,
  names,
  timeZone,
  unit = 'staffed',
  columnWidth,
  children,
}: {
  label: string;
  /** Those that have passed, then those ahead. */
  columns: readonly NeedColumn[];
  /** Names of those ahead. */
  names: readonly string[];
  /** Of the site: names the hours that have passed; without it they are not read. */
  timeZone?: string;
  unit?: string;
  columnWidth: number;
  children: ReactNode;
}) {
  const past = columns.length - names.length;
  const from = timeZone === undefined ? past : 0;
  const readings = columns.slice(from).map((column, index): Reading => {
    const ahead = from + index - past;
    const name = ahead >= 0 ? names[ahead] : formatTime(column.at, timeZone ?? 'UTC');
    return { name, text: sayColumn(column, unit) };
  });
  return (
    <ChartReader {...{ label, readings, columnWidth }} start={from * columnWidth} first={past - from}>
      {children}
    </ChartReader>
  );
}

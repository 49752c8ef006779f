import { useRef, useState } from 'react';
import type { KeyboardEvent } from 'react';
import { csvText } from '../lib/csv-text.ts';
import { fileCautions, fileNameOf } from '../lib/file-cautions.ts';
import { formatNumber } from '../lib/format.ts';
import { PictureTools } from './PictureTools.tsx';

const days = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
const hours = Array.from({ length: 24 }, (_, hour) => hour);
const looks = ['bg-q1 text-q1i', 'bg-q2 text-q2i', 'bg-q3 text-q3i', 'bg-q4 text-q4i', 'bg-q5 text-q5i'];
const two = (value: number) => String(value).padStart(2, '0');

/** "Monday 07:00", of an hour of the week, 0 Monday 00:00. */
export function hourOfWeekName(index: number): string {
  return `${days[Math.floor(index / 24)]} ${two(index % 24)}:00`;
}

/**
 * Figures by hour of the week, every value printed and toned. Pointer, touch or arrow keys bring a cell's own sentence
 * beneath the map; each cell says it to a screen reader.
 */
export function HourOfWeekMap({
  name,
  caption,
  ratePerHour,
  say,
}: {
  name: string;
  caption: string;
  /** 168 figures, Monday 00:00 first. */
  ratePerHour: readonly number[];
  /** A cell in words. */
  say: (index: number) => string;
}) {
  const [chosen, setChosen] = useState(0);
  const tableRef = useRef<HTMLTableElement>(null);
  const file = () =>
    csvText(
      [`${caption} (${document.title})`, ...fileCautions],
      ['Day', 'Hour', 'Arrivals an hour'],
      ratePerHour.map((rate, index) => [
        days[Math.floor(index / 24)],
        `${two(index % 24)}:00`,
        Number(rate.toFixed(4)),
      ]),
    );
  const most = Math.max(...ratePerHour, 1e-9);
  const decimals = most < 20 ? 1 : 0;
  const look = (rate: number) => looks[Math.min(4, Math.floor((rate / most) * 5))];

  function move(event: KeyboardEvent) {
    const step = { ArrowRight: 1, ArrowLeft: -1, ArrowDown: 24, ArrowUp: -24 }[event.key];
    if (step === undefined) return;
    event.preventDefault();
    const next = (chosen + step + 168) % 168;
    setChosen(next);
    tableRef.current?.querySelector<HTMLElement>(`[data-hour="${String(next)}"]`)?.focus();
  }

  return (
    <div>
      <div className="relative overflow-x-auto" role="region" aria-label={name} tabIndex={-1}>
        <table
          ref={tableRef}
          role="grid"
          aria-readonly="true"
          className="w-full min-w-[62rem] table-fixed border-separate border-spacing-px text-center text-label"
          onKeyDown={move}
        >
          <caption className="sr-only">{caption} Arrow keys move from hour to hour.</caption>
          <thead>
            <tr>
              <th scope="col" className="w-14 text-left">
                <span className="sr-only">Day</span>
              </th>
              {hours.map((hour) => (
                <th key={hour} scope="col" className="pb-1 font-semibold text-ink2">
                  {two(hour)}
                </th>
              ))}
              <th scope="col" className="w-14 pb-1 text-right font-semibold text-ink2">
                Day
              </th>
            </tr>
          </thead>
          <tbody>
            {days.map((day, row) => (
              <tr key={day}>
                <th scope="row" className="text-left font-extrabold text-ink">
                  {day.slice(0, 3)}
                </th>
                {hours.map((hour) => {
                  const index = row * 24 + hour;
                  const rate = ratePerHour[index];
                  return (
                    <td
                      key={hour}
                      data-hour={index}
                      tabIndex={index === chosen ? 0 : -1}
                      onFocus={() => setChosen(index)}
                      onPointerEnter={() => setChosen(index)}
                      aria-label={say(index)}
                      className={`h-7 font-bold tight ${look(rate)}`}
                    >
                      {formatNumber(rate, decimals)}
                    </td>
                  );
                })}
                <td className="text-right font-extrabold text-ink">
                  {formatNumber(ratePerHour.slice(row * 24, row * 24 + 24).reduce((sum, rate) => sum + rate, 0))}
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <p className="mt-2 mb-1 text-quiet text-ink2">{say(chosen)}.</p>
      <PictureTools of={tableRef} title={name} csv={[{ fileName: `${fileNameOf(name)}.csv`, text: file }]} />
    </div>
  );
}

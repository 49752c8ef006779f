import { writeFile } from 'node:fs/promises';
import { parseArgs } from 'node:util';
import { localDate, makeZone, type Zone } from '../../shared/domain/zoned-time.ts';
import type { HourlyCounts } from '../../shared/forecasting/arrival-model.ts';
import { countHourly } from '../../shared/forecasting/count-hourly.ts';
import { evaluateArrivals, usualEvaluation } from '../../shared/forecasting/evaluate-arrivals.ts';
import { evaluateNeed, type NeedEvaluation } from '../../shared/forecasting/evaluate-need.ts';
import type { CalendarDay, VisitTable } from '../../shared/forecasting/visit-table.ts';
import { publicHolidays } from '../database/read-calendar.ts';
import { evaluationText } from './evaluation-report.ts';
import { readHourlyCsv } from './read-hourly-csv.ts';
import { readVisitCsv } from './read-visit-csv.ts';

/**
 * `npm run evaluate`: the whole model on a file, outside the web application, by rolling weekly origin over its last
 * weeks. Prints a table and writes JSON.
 */
const usage = `Usage: npm run evaluate -- --hourly FILE | --visits FILE --timezone TZ [--country CC] [--weeks 52] [--json OUT]

  --hourly FILE    arrivals by local hour: columns local_date, hour, arrivals
  --visits FILE    visits in this product's own form; need is scored too
  --timezone TZ    IANA name of the site's time zone
  --country CC     country of the public holidays, two letters; none if left out
  --weeks N        weeks scored, the last of the file (52)
  --json OUT       write the scores to this file
`;

interface Input {
  counts: HourlyCounts;
  cautions: string[];
  visits: { table: VisitTable; areas: number; fromUtc: number; toUtc: number } | null;
}

async function readInput(hourly: string | undefined, visits: string | undefined, zone: Zone): Promise<Input> {
  if (hourly !== undefined) return { ...(await readHourlyCsv(hourly, zone)), visits: null };
  const file = await readVisitCsv(visits ?? '', Math.floor(Date.now() / 1000));
  let first = Infinity;
  let last = -Infinity;
  for (const at of file.visits.arrivalAt) {
    first = Math.min(first, at);
    last = Math.max(last, at);
  }
  // Whole local days between the first and the last arrival: the log's edges may be cut.
  const day = (at: number, up: boolean): number => {
    const local = zone.toLocal(at) / 86_400;
    const midnight = (up ? Math.ceil(local) : Math.floor(local)) * 86_400;
    return zone.fromLocal(midnight)[0] ?? zone.fromLocal(midnight + 3600)[0];
  };
  const fromUtc = day(first, true);
  const toUtc = day(last, false);
  const counts = countHourly(file.visits, file.areas.length, zone, fromUtc, toUtc);
  return {
    counts,
    cautions: [`Care areas: ${file.areas.join(', ')}.`, ...file.cautions],
    visits: { table: file.visits, areas: file.areas.length, fromUtc, toUtc },
  };
}

async function run(): Promise<number> {
  const { values } = parseArgs({
    options: {
      hourly: { type: 'string' },
      visits: { type: 'string' },
      timezone: { type: 'string' },
      country: { type: 'string' },
      weeks: { type: 'string', default: '52' },
      json: { type: 'string' },
    },
  });
  const { hourly, visits, timezone, country, json } = values;
  const weeks = Number(values.weeks);
  if ((hourly === undefined) === (visits === undefined) || timezone === undefined) {
    process.stderr.write(usage);
    return 2;
  }
  const zone = makeZone(timezone);
  const input = await readInput(hourly, visits, zone);
  for (const caution of input.cautions) process.stderr.write(`${caution}\n`);

  const { firstLocalHour, exposureHours } = input.counts;
  const fromDate = localDate(firstLocalHour * 3600);
  // Holidays just outside count too: the days before one differ.
  const untilDate = localDate((firstLocalHour + exposureHours.length + 14 * 24) * 3600);
  const calendar: CalendarDay[] = country === undefined ? [] : publicHolidays(country, null, fromDate, untilDate);
  if (country !== undefined && calendar.length === 0) {
    throw new RangeError(`no public holidays are known for the country ${JSON.stringify(country)}`);
  }

  let told = '';
  const tell = (what: string) => (share: number) => {
    const text = `${what}: ${String(Math.floor(share * 10) * 10)} %\n`;
    if (text !== told) process.stderr.write(text);
    told = text;
  };
  const arrivals = evaluateArrivals(input.counts, calendar, { weeks, onProgress: tell('Arrivals') });
  let need: NeedEvaluation | null = null;
  if (input.visits) {
    const { table, areas, fromUtc, toUtc } = input.visits;
    need = evaluateNeed({
      visits: table,
      areas,
      zone,
      fromUtc,
      toUtc,
      facts: { selectedBy: 'arrived', takenAt: toUtc, missingDeparture: 'still present' },
      calendar,
      weeks,
      onProgress: tell('Need'),
    });
  }
  process.stdout.write(evaluationText(arrivals, need));
  if (json !== undefined) {
    const result = {
      model: { ...arrivals.model, ...(need ? { need: need.need, needByArea: need.needByArea } : {}) },
      baselines: arrivals.baselines,
      settings: {
        timezone,
        country: country ?? null,
        weeks,
        from: localDate(arrivals.fromLocalHour * 3600),
        to: localDate((arrivals.toLocalHour - 1) * 3600),
        draws: usualEvaluation.draws,
        seed: usualEvaluation.seed,
        chosen: arrivals.choices.map(({ originLocalHour, settings }) => ({
          origin: localDate(originLocalHour * 3600),
          ...settings,
        })),
        byDaysAhead: arrivals.byLead,
        shortfall: need?.shortfall ?? null,
      },
    };
    await writeFile(json, `${JSON.stringify(result, null, 2)}\n`);
  }
  return 0;
}

try {
  process.exitCode = await run();
} catch (error) {
  if (!(error instanceof Error)) throw error;
  const expected = error instanceof RangeError || 'code' in error;
  process.stderr.write(`${expected ? error.message : (error.stack ?? error.message)}\n`);
  process.exitCode = 1;
}

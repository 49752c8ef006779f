import type { DateOrder } from '../../shared/domain/local-time.ts';
import { makeStream } from '../../shared/stochastic/random.ts';

/** Names of care areas as departments give them; invented, and none of them a person's. */
const areaNames = [
  'Acute',
  'Resuscitation',
  'Ambulatory',
  'Children',
  'Observation',
  'Majors',
  'Minors',
  'Majors 2',
  'Fast Track',
  'Rapid Assessment',
  'Blue Zone',
  'Green Zone',
  'Pod A',
  'Pod B',
  'RESUS',
  'EDOBS',
  'A1',
  'A2',
  'B-side',
  'Trauma Bay',
  'Urgent Care',
  'Mental Health Suite',
  'Clinical Decision Unit',
  'CDU',
  'Waiting Room',
  'Ward 7',
  'St Brannock Unit',
  'Zone 3',
  'Older People’s Area',
  'Chairs',
  'East Hall',
  'ED-WR',
  'TRG',
  '30412',
  'UTC',
];
const dispositionWords = [
  'Home',
  'Admitted',
  'Transferred',
  'Left before treatment',
  'Discharged',
  'DISCH HOME',
  'ADM WARD',
  'LWBS',
  'Admit to ICU',
  'Usual residence',
];
const arrivalHeaders = [
  'Arrival',
  'arrival_at',
  'ArrivalDateTime',
  'Arrival Date/Time',
  'ARRIVED',
  'Date/time of arrival',
];
const departureHeaders = ['Departure', 'Discharge Date/Time', 'LeftDepartment', 'departed_at', 'Depart time'];
const areaHeaders = ['Area', 'Care area', 'Unit', 'Zone', 'Location', 'Ward name', 'ED_LOCATION'];
const dispositionHeaders = ['Disposition', 'Outcome', 'Discharge Dest', 'Disposal'];
const ambulanceHeaders = ['Ambulance', 'Arr By Amb', 'By EMS', 'arrived_by_ambulance'];

export interface CleanExport {
  csv: string;
  areas: { id: string; name: string }[];
  rows: number;
  /** What a person would answer if the dates cannot tell. */
  dateOrder: DateOrder;
}

/** A file as some hospital might export it, with nothing wrong and nothing identifying: form, names, dates and words drawn from a seed. */
export function makeCleanExport(seed: number): CleanExport {
  const stream = makeStream(seed, 3);
  const below = (count: number) => Math.floor(stream.uniform() * count);
  const pick = <T>(choices: readonly T[]): T => choices[below(choices.length)];
  const two = (value: number) => String(value).padStart(2, '0');
  const form = below(6);
  const time = (at: number) => {
    const date = new Date(at * 1000);
    const [y, m, d] = [String(date.getUTCFullYear()), two(date.getUTCMonth() + 1), two(date.getUTCDate())];
    const clock = `${two(date.getUTCHours())}:${two(date.getUTCMinutes())}`;
    const month = date.toLocaleString('en', { month: 'short', timeZone: 'UTC' });
    return [
      `${y}-${m}-${d} ${clock}`,
      `${y}-${m}-${d}T${clock}:00Z`,
      `${d}/${m}/${y} ${clock}`,
      `${m}/${d}/${y} ${clock}`,
      `${d}-${month}-${y} ${clock}`,
      `${d}.${m}.${y} ${clock}`,
    ][form];
  };
  const areas = Array.from({ length: 1 + below(6) }, () => pick(areaNames))
    .filter((name, index, all) => all.indexOf(name) === index)
    .map((name, index) => ({ id: `area-${String(index)}`, name }));
  const written = areas.map(({ name }) => pick([name, name.toUpperCase(), name.toLowerCase()]));
  const dispositions = Array.from({ length: 3 }, () => pick(dispositionWords));
  const yesNo = pick([
    ['Y', 'N'],
    ['Yes', 'No'],
    ['1', '0'],
    ['Ambulance', 'Walk-in'],
    ['true', 'false'],
  ]);
  const delimiter = pick([',', ';', '\t', '|']);
  const rows = 20 + below(60);
  const start = 1_735_689_600 + below(400) * 86_400;
  const lines = [
    [pick(arrivalHeaders), pick(departureHeaders), pick(areaHeaders), pick(dispositionHeaders), pick(ambulanceHeaders)],
  ];
  for (let row = 0; row < rows; row += 1) {
    const arrival = start + row * 27_000 + below(200) * 60;
    const departure = arrival + (20 + below(600)) * 60;
    lines.push([time(arrival), time(departure), pick(written), pick(dispositions), pick(yesNo)]);
  }
  return {
    csv: lines.map((line) => line.join(delimiter)).join(pick(['\n', '\r\n'])),
    areas,
    rows,
    dateOrder: form === 3 ? 'month first' : 'day first',
  };
}

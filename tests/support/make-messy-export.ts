import { localParts, type Zone } from '../../shared/domain/zoned-time.ts';
import { makeStream } from '../../shared/stochastic/random.ts';

/** A file as a hurried person might export it, and what a careful reader finds in it. */
export interface MessyExport {
  /** In Windows-1252, with semicolons, columns that identify patients, spellings that vary, and faults. */
  bytes: Buffer;
  rows: number;
  goodRows: number;
  /** Texts of it that must never leave the computer. */
  secrets: string[];
}

const givenNames = ['Olivia', 'Tamsin', 'Bram', 'Ingrid', 'Casper'];
const familyNames = ['Fairweather', 'Quillfeather', 'Okell', 'Thistlewood', 'Marlpit'];
const complaints = ['fell off a ladder at home', 'chest pain since the morning', 'cut to the left hand; café knife'];
const routes = ['Home', 'HOME', 'Admitted to ward', 'Transfer - other hospital', 'Left, did not wait'];

/**
 * Visits of ten days before and after a local autumn clock change, invented. Faults: two departures before their arrivals,
 * three rows of an area that the site does not have, one that is cut short, and one arrival in the hour that came twice.
 * @param from UTC seconds of the first arrival
 */
export function makeMessyExport(zone: Zone, from: number, repeatedAt: number): MessyExport {
  const stream = makeStream(41, 7);
  const pick = <T>(choices: readonly T[]): T => choices[Math.floor(stream.uniform() * choices.length)];
  const two = (value: number) => String(value).padStart(2, '0');
  const written = (at: number) => {
    const { day, month, year, hour, minute } = localParts(zone.toLocal(at));
    return `${two(day)}/${two(month)}/${String(year)} ${two(hour)}:${two(minute)}`;
  };
  const lines = [
    'Pt Name;Hospital No;DOB;Arrival Date/Time;Placed Date/Time;Decision To Admit;Discharge Date/Time;Unit;Discharge Dest;Arr By Amb;Complaint',
  ];
  const rows = 400;
  for (let row = 0; row < rows; row += 1) {
    // One of them in the hour that comes twice; the others keep clear of it.
    let arrival = from + row * 2900 + Math.floor(stream.uniform() * 30) * 60;
    if (row === 200) arrival = repeatedAt;
    else if (Math.abs(arrival - repeatedAt) < 7200) arrival += 14_400;
    const stay = (40 + Math.floor(stream.uniform() * 400)) * 60;
    const isWrongWay = row === 50 || row === 51;
    let departure = arrival + (isWrongWay ? -3600 : stay);
    if (row !== 200 && Math.abs(departure - repeatedAt) < 7200) departure += 14_400;
    const route = pick(routes);
    const isStill = row % 97 === 96;
    const fields = [
      `${pick(familyNames)}, ${pick(givenNames)}`,
      `H${String(482_000 + row)}`,
      `0${String(1 + (row % 9))}/02/${String(1940 + (row % 60))}`,
      written(arrival),
      row % 5 === 0 || isWrongWay ? '' : written(Math.min(arrival + 900, departure)),
      route.startsWith('Admitted') && !isWrongWay ? written(Math.max(arrival, departure - 1800)) : '',
      isStill ? '' : written(departure),
      row >= 300 && row < 303 ? 'XRAY' : pick(['Acute', 'ACUTE', 'acute ', 'Minor injuries', 'MINOR  INJURIES']),
      isStill ? '' : route,
      pick(['Y', 'N', 'y', 'n']),
      `"${pick(complaints)}"`,
    ];
    lines.push((row === 350 ? fields.slice(0, 6) : fields).join(';'));
  }
  const bytes = Buffer.from(`${lines.join('\r\n')}\r\n`, 'latin1');
  const secrets = [...familyNames, ...givenNames, 'ladder', 'café', 'H4820', '/1940', 'XRAY'];
  return { bytes, rows, goodRows: rows - 2 - 3 - 1, secrets };
}

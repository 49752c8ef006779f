import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { localParts, type Zone } from '../../../shared/domain/zoned-time.ts';
import type { AlertDecision } from '../../../shared/forecasting/outlook-alert.ts';
import type { AreaCensus, AreaOutlook } from '../../../shared/forecasting/outlook-types.ts';
import { sayRemedy } from '../../../shared/forecasting/remedy-sentence.ts';
import { layOutMail, type MailContent } from '../../mail/layout.ts';

/** An area that has newly passed its limit, with the outlook's own figures. */
export interface AlertedArea {
  name: string;
  spaceKind: 'bed' | 'chair';
  spaces: number;
  alertLimit: number;
  census: AreaCensus | null;
  outlook: AreaOutlook;
  decision: AlertDecision;
}

const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
const namedInSubject = 3;

/** Says which areas pass their limits, from when, how likely it is, what would bring them under, and what the mail is not. */
export function writeAlertMail({
  site,
  zone,
  issuedAt,
  modelFittedAt,
  hours,
  alerted,
  uncounted,
  baseUrl,
}: {
  site: { id: string; name: string };
  zone: Zone;
  issuedAt: number;
  modelFittedAt: number | null;
  hours: readonly number[];
  /** At least one. */
  alerted: readonly AlertedArea[];
  uncounted: readonly { name: string }[];
  baseUrl: string;
}): { subject: string; text: string; html: string; /** The last hour past a limit, UTC seconds. */ lastHour: number } {
  const time = (at: number) => {
    const { hour, minute } = localParts(zone.toLocal(at));
    return `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
  };
  const dayOf = (at: number) => weekdays[localParts(zone.toLocal(at)).weekday - 1];
  const percent = (share: number) => `${String(Math.round(share * 100))} %`;
  const passes = ({ alertLimit, decision }: AlertedArea) => {
    const first = hours[decision.past[0]];
    return `passes its ${percent(alertLimit)} limit from ${time(first)} on ${dayOf(first)}`;
  };
  const [only, ...others] = alerted;
  const alone = others.length === 0;
  const title = alone ? `${only.name} ${passes(only)}` : `${listOf(alerted)} pass their alert limits`;

  const blocks: MailContent['blocks'] = alerted.map((area) => {
    const { decision, outlook, census } = area;
    const peak = hours[decision.peakIndex ?? decision.past[0]];
    const lines = [
      `${alone ? '' : `It ${passes(area)}. `}The chance of a shortfall reaches ${formatChance(decision.chance)}, ` +
        `${riskWord(decision.chance).toLowerCase()}, at ${time(peak)} on ${dayOf(peak)}${inNights(decision.chance)}.`,
    ];
    if (decision.past.some((index) => (outlook.bedsToAdd[index] ?? 0) > 0)) {
      const said: string[] = [];
      const worst = { area: { ...area, areaId: outlook.areaId, censusTakenAt: null }, outlook, past: decision.past };
      sayRemedy(worst, hours, time, (text) => said.push(/^[,.]/.test(text) ? text : ` ${text}`), percent);
      lines.push(said.join('').trim());
    }
    if (census) {
      lines.push(
        `Counted at ${time(census.takenAt)}: ${String(census.present)} present, ${String(census.waiting)} waiting, ${String(census.boarding)} boarding.`,
      );
    }
    return { heading: alone ? null : area.name, lines };
  });
  if (uncounted.length > 0) {
    const names = uncounted.map(({ name }) => name).join(', ');
    blocks.push({ heading: 'Not counted', lines: [`${names}: nothing is said of what has no census.`] });
  }

  const content = {
    title: `${title}.`,
    blocks,
    link: { text: `Open Tonight of ${site.name}`, url: `${baseUrl}/sites/${encodeURIComponent(site.id)}/tonight` },
    footer: [
      'This mail may be late and is not a pager. Tonight shows the newest figures.',
      `Outlook issued at ${time(issuedAt)} on ${dayOf(issuedAt)}.${modelFittedAt === null ? '' : ` Model fitted ${ageInDays(issuedAt - modelFittedAt)}.`} An area is told of once; again only after its chance has fallen 5 points below its limit (for a limit under 10 %: to half of it), or when another shift is in charge.`,
      'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
      'A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not foresee a major incident or a sudden closure: use your incident plan.',
    ],
  };
  const { chance } = only.decision;
  const about = alone
    ? `${title} (${formatChance(chance)}, ${riskWord(chance).toLowerCase()})`
    : alerted.length <= namedInSubject
      ? title
      : `${String(alerted.length)} areas pass their alert limits`;
  const lastHour = Math.max(...alerted.map(({ decision }) => hours[decision.past[decision.past.length - 1]]));
  return { subject: `${site.name}: ${about}`.slice(0, 250), ...layOutMail(content), lastHour };
}

function listOf(areas: readonly { name: string }[]): string {
  const names = areas.map(({ name }) => name);
  return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} and ${names[names.length - 1]}`;
}

/** The meaning of a chance as printed, where whole nights in ten can say it. */
function inNights(chance: number): string {
  const nights = Math.round(Math.round(chance * 100) / 10);
  return nights >= 1 && nights <= 9
    ? `: about ${String(nights)} ${nights === 1 ? 'night' : 'nights'} in 10 like this`
    : '';
}

function ageInDays(seconds: number): string {
  const days = Math.floor(seconds / 86_400);
  return days < 1 ? 'today' : `${String(days)} ${days === 1 ? 'day' : 'days'} ago`;
}

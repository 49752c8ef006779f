import { createElement } from 'react';
import { DayFan } from '../../../shared/charts/DayFan.tsx';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import type { RiskStep } from '../../../shared/domain/risk-word.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { drawMailPicture, mailColours, type MailPicture } from '../../mail/mail-picture.ts';
import { gridText, stepsOf, worstArea } from './brief-grid.ts';
import { sentLine, smallNote, weekLink, type BriefFrame, type SectionWords } from './brief-frame.ts';
import { pageHtml, sectionHtml } from './brief-html.ts';
import { unsubscribeMark, type ComposedBrief, type SectionFacts } from './brief-section.ts';
import {
  cautions,
  hindsightRows,
  number,
  sayArrivals,
  sayDone,
  sayHeadline,
  sayRisk,
  sayScores,
  shiftsAtRisk,
  siteCautions,
  writingOf,
} from './brief-words.ts';

/** Shifts at risk that a section lists; the page behind the link has all. */
const listed = 5;

/** Writes a brief of one section, or of one for each site of a group. */
export function writeBrief(frame: BriefFrame, sections: readonly SectionFacts[]): ComposedBrief {
  const words = sections.map((section, index) => wordsOf(section, frame.composedAt, index));
  const first = sections[0];
  const title = frame.covers === 'site' ? words[0].headline : groupTitle(sections);
  const steps = new Set(sections.flatMap((section) => [...stepsOf(section)]));
  const html = pageHtml(
    frame,
    title,
    first.site.timeZone,
    sections.map((section, index) => sectionHtml(frame, section, words[index])),
  );
  const pictures = [
    ...[...steps].sort().map(markPicture),
    ...words.flatMap(({ chart }) => (chart ? [chart.picture] : [])),
  ];
  return {
    subject: `${frame.name}, weekly brief: ${title}`.replace(/[\p{Cc}\u2028\u2029]+/gu, ' ').slice(0, 250),
    html,
    text: textOf(frame, title, sections, words),
    pictures: pictures.map(({ cid, contentType, content }) => ({ cid, contentType, content })),
  };
}

function groupTitle(sections: readonly SectionFacts[]): string {
  const short = sections.filter(({ outlook }) => outlook?.shifts.some(({ chance }) => chance >= 0.5));
  const blind = sections.filter(({ outlook }) => outlook === null);
  if (short.length > 0) {
    return `${short.map(({ site }) => site.name).join(' and ')} ${short.length === 1 ? 'has' : 'have'} shifts that are likely to run short.`;
  }
  if (blind.length > 0)
    return `What next week needs is not known at ${blind.map(({ site }) => site.name).join(' and ')}.`;
  return 'No shift is likely to run short at any site next week.';
}

function wordsOf(section: SectionFacts, now: number, index: number): SectionWords {
  const writing = writingOf(makeZone(section.site.timeZone));
  const risks = shiftsAtRisk(section);
  const rest = risks.length - listed;
  return {
    headline: sayHeadline(section),
    arrivals: sayArrivals(section),
    risks: risks.slice(0, listed).map((risk) => sayRisk(section, risk, writing, now)),
    moreRisks: rest > 0 ? `And ${number(rest)} more, by area and shift, in the week ahead.` : null,
    area: worstArea(section),
    hindsight: hindsightRows(section),
    done: sayDone(section),
    scores: sayScores(section),
    changes: section.changes,
    cautions: siteCautions(section, now),
    chart: arrivalsChart(section, index),
  };
}

function arrivalsChart(section: SectionFacts, index: number): SectionWords['chart'] {
  if (!section.arrivals) return null;
  const writing = writingOf(makeZone(section.site.timeZone));
  const unusual = new Set(section.calendar.map(({ date }) => date));
  const zone = makeZone(section.site.timeZone);
  const days = section.arrivals.days.map((day) => ({
    ...day,
    name: writing.weekday(day.from).slice(0, 3),
    date: writing.date(day.from),
    marked: unusual.has(new Date(zone.toLocal(day.from) * 1000).toISOString().slice(0, 10)),
  }));
  const cid = `arrivals-${String(index + 1)}`;
  const alt = `Arrivals by day, middle figure and 95 % range: ${days
    .map((day) => `${day.name} ${day.date} ${number(day.p50)} (${number(day.p2_5)} to ${number(day.p97_5)})`)
    .join(', ')}.`;
  return { cid, alt, picture: drawMailPicture(cid, createElement(DayFan, { days }), mailColours.paper) };
}

function markPicture(step: RiskStep): MailPicture {
  const ink = mailColours[`r${step}i` as const];
  const ground = mailColours[`r${step}` as const];
  return drawMailPicture(
    `mark-r${String(step)}`,
    createElement(RiskMark, { step, width: 20, height: 16, fill: ink }),
    ground,
  );
}

function textOf(
  frame: BriefFrame,
  title: string,
  sections: readonly SectionFacts[],
  words: readonly SectionWords[],
): string {
  const parts = sections.flatMap((section, index) => {
    const said = words[index];
    const head = frame.covers === 'group' ? [`${section.site.name.toUpperCase()}\n${said.headline}`] : [];
    const risks = said.risks.map((risk) => `${risk.name}\n  ${risk.need}.\n  ${risk.cover}.`);
    const grid = said.area
      ? [`${said.area.name}, chance of being short some time in the shift`, ...gridText(section, said.area.id)]
      : [];
    const hindsight = said.hindsight.map(
      ({ name, last, four, year }) => `${name}: ${last} (four weeks before: ${four}; year: ${year})`,
    );
    return [
      ...head,
      said.arrivals,
      ...(risks.length > 0 ? [`Shifts at risk\n${risks.join('\n')}`] : []),
      ...(said.moreRisks === null ? [] : [said.moreRisks]),
      ...(grid.length > 0 ? [grid.join('\n')] : []),
      ...(said.chart ? [said.chart.alt] : []),
      `Last week in hindsight\n${hindsight.join('\n')}\n${said.done}`,
      `How last week’s forecast did\n${said.scores}`,
      ...(said.changes.length > 0 ? [`What changed last week\n${said.changes.join('\n')}`] : []),
      ...(said.cautions.length > 0 ? [`To know\n${said.cautions.join('\n')}`] : []),
      `Open the week ahead of ${section.site.name} (behind sign-in):\n${weekLink(frame, section)}`,
    ];
  });
  const foot = [...cautions, smallNote(sections), sentLine(frame, sections[0].site.timeZone)];
  return `${[`Weekly brief, ${frame.name}`, title, ...parts, foot.join('\n'), `Unsubscribe:\n${unsubscribeMark}`].join('\n\n')}\n`;
}

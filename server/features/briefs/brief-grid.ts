import { formatChance, riskStep, riskWord, type RiskStep } from '../../../shared/domain/risk-word.ts';
import { escapeHtml } from '../../mail/layout.ts';
import { mailColours } from '../../mail/mail-picture.ts';
import type { SectionFacts, ShiftRisk } from './brief-section.ts';
import { writingOf } from './brief-words.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';

export const face = "font-family:'Nunito Sans',Verdana,Arial,sans-serif";

/** The area of which the grid tells: the one whose worst shift is worst. */
export function worstArea(section: SectionFacts): { id: string; name: string } | null {
  const shifts = section.outlook?.shifts ?? [];
  const worst = shifts.reduce<ShiftRisk | null>(
    (best, each) => (best && best.chance >= each.chance ? best : each),
    null,
  );
  const area = worst && section.areas.find(({ id }) => id === worst.areaId);
  return area ? { id: area.id, name: area.name } : null;
}

/** The chances of one area by day and shift. */
export function gridRows(
  section: SectionFacts,
  areaId: string,
): { shifts: string[]; days: { name: string; date: string; cells: (ShiftRisk | null)[] }[] } {
  const writing = writingOf(makeZone(section.site.timeZone));
  const own = (section.outlook?.shifts ?? []).filter((each) => each.areaId === areaId).sort((a, b) => a.from - b.from);
  const shifts = [...new Set(own.map(({ shift }) => shift))];
  const days = [...new Set(own.map(({ from }) => writing.date(from)))];
  return {
    shifts,
    days: days.map((date) => {
      const ofDay = own.filter(({ from }) => writing.date(from) === date);
      return {
        name: writing.weekday(ofDay[0].from).slice(0, 3),
        date,
        cells: shifts.map((shift) => ofDay.find((each) => each.shift === shift) ?? null),
      };
    }),
  };
}

/** The steps whose marks the grid shows. */
export function stepsOf(section: SectionFacts): Set<RiskStep> {
  const area = worstArea(section);
  const own = (section.outlook?.shifts ?? []).filter(({ areaId }) => areaId === area?.id);
  return new Set(own.map(({ chance }) => riskStep(chance)));
}

const heads = [
  ['#CFDEE3', '#11232C'],
  ['#456373', '#FFFFFF'],
  ['#16303D', '#F2EAD9'],
] as const;

/** A table of chances by day and shift: in every cell number, mark and word. */
export function gridHtml(section: SectionFacts, areaId: string): string {
  const { shifts, days } = gridRows(section, areaId);
  const head = shifts
    .map((shift, index) => {
      const [ground, ink] = heads[Math.min(index, heads.length - 1)];
      return `<th scope="col" align="left" bgcolor="${ground}" style="${face};font-size:15px;font-weight:bold;background:${ground};color:${ink};padding:5px;border:1px solid ${mailColours.paper}">${escapeHtml(shift)}</th>`;
    })
    .join('');
  const rows = days.map(({ name, date, cells }) => {
    const shown = cells.map((cell) => {
      if (!cell) return `<td style="padding:6px;border:1px solid ${mailColours.paper}"></td>`;
      const step = riskStep(cell.chance);
      const ground = mailColours[`r${step}` as const];
      const ink = mailColours[`r${step}i` as const];
      return `<td bgcolor="${ground}" style="${face};background:${ground};color:${ink};padding:6px 4px 6px 5px;border:1px solid ${mailColours.paper};line-height:1.15"><span style="font-size:16px;font-weight:bold;white-space:nowrap">${escapeHtml(formatChance(cell.chance))} <img src="cid:mark-r${String(step)}" width="18" height="14" alt="" style="vertical-align:-1px"></span><br><span style="font-size:13px;font-weight:bold">${riskWord(cell.chance)}</span></td>`;
    });
    return `<tr><th scope="row" align="left" class="ink" style="${face};font-size:15px;line-height:1.2;padding-right:5px;color:${mailColours.ink};white-space:nowrap">${name}<br><span class="ink2" style="font-weight:normal;color:${mailColours.ink2};font-size:14px">${date}</span></th>${shown.join('')}</tr>`;
  });
  return `<table width="100%" cellpadding="0" cellspacing="0" style="border-collapse:collapse"><tr><td></td>${head}</tr>${rows.join('')}</table>`;
}

/** The same as lines of text. */
export function gridText(section: SectionFacts, areaId: string): string[] {
  const { shifts, days } = gridRows(section, areaId);
  return days.map(
    ({ name, date, cells }) =>
      `${name} ${date}: ${cells
        .map((cell, index) =>
          cell ? `${shifts[index]} ${formatChance(cell.chance)} ${riskWord(cell.chance).toLowerCase()}` : null,
        )
        .filter((text) => text !== null)
        .join('; ')}`,
  );
}

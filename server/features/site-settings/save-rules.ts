import type { RulesBody } from '../../../shared/api/site-settings.ts';
import { clockText } from '../../../shared/domain/clock-text.ts';
import { holidayCountries } from '../../database/holiday-regions.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Site } from '../../entities/Site.ts';
import { badInput, type Fault } from '../../errors.ts';
import { changeSettings, percent, type SettingsContext } from './change-settings.ts';

/** Saves the planning rules of a site. An unknown country or region is refused. */
export async function saveRules(deps: Dependencies, context: SettingsContext, body: RulesBody) {
  const { revision, planningRisk, waitLimitMinutes, country, region } = body;
  const bedMeetingMinutes = [...body.bedMeetingMinutes].sort((a, b) => a - b);
  const known = holidayCountries().find(({ code }) => code === country);
  const faults: Fault[] = [];
  if (!known) {
    faults.push({
      at: 'country',
      message: `Public holidays of the country “${country}” are not known. Choose one of the list.`,
    });
  } else if (region !== null && !known.regions.some(({ code }) => code === region)) {
    faults.push({
      at: 'region',
      message: `${known.name} has no holiday region “${region}”. Choose one of the list, or none.`,
    });
  }
  if (faults.length > 0) throw badInput('The planning rules were refused.', faults);
  return changeSettings(deps, context, 'rules', revision, async (manager) => {
    const before = await manager.findOneByOrFail(Site, { id: context.site.id });
    await manager.update(
      Site,
      { id: before.id },
      { planningRisk, waitLimitMinutes, bedMeetingMinutes, country, region },
    );
    return [
      { setting: 'Planning risk', before: percent(before.planningRisk), after: percent(planningRisk) },
      { setting: 'Wait limit', before: minutes(before.waitLimitMinutes), after: minutes(waitLimitMinutes) },
      { setting: 'Bed-meeting times', before: times(before.bedMeetingMinutes), after: times(bedMeetingMinutes) },
      { setting: 'Country of public holidays', before: before.country, after: country },
      { setting: 'Region of public holidays', before: before.region, after: region },
    ].map((difference) => ({ subject: null, ...difference }));
  });
}

const minutes = (value: number | null) => (value === null ? null : `${String(value)} min`);
const times = (values: readonly number[]) => (values.length === 0 ? null : values.map(clockText).join(', '));

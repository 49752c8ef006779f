import { demoSites } from '../../demo/farrowmere.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { makeExactWire, type ExactWire } from '../../shared/forecasting/exact-wire.ts';
import type { OutlookInput } from '../../shared/forecasting/outlook-types.ts';
import type { OutlookModel } from '../../shared/forecasting/prepare-need.ts';
import { previewNeed } from '../../shared/forecasting/preview-need.ts';
import { readExactWire } from '../../shared/forecasting/read-exact-wire.ts';
import { needChangeOf } from '../../shared/forecasting/scenario.ts';
import { changeCells, riskLeft, smallestChange } from '../../shared/forecasting/smallest-change.ts';
import { inChargeSpans } from '../../shared/domain/in-charge-spans.ts';
import { shiftsBetween } from '../../shared/domain/shift-times.ts';
import { measure, milliseconds, type Bench, type Figure } from './measure.ts';

const hour = 3600;
const hoursLookedAt = 168;
const turns = 20;
const site = demoSites[0];
const zone = makeZone(site.timeZone);

/** Seven days of every area of the site from a full hour on, with a census and the same beds throughout. */
function weekInput(now: number): OutlookInput {
  return {
    issuedAt: now,
    timeZone: site.timeZone,
    hours: Array.from({ length: hoursLookedAt }, (_, h) => now + (h + 1) * hour),
    areas: site.areas.map((area) => ({
      areaId: area.id,
      census: { takenAt: now - 600, present: Math.floor(area.spaces * 0.8), waiting: 1, boarding: 2 },
      staffedBeds: [{ at: now - 3 * hour, beds: Math.round(area.spaces * 0.85) }],
      spaces: area.spaces,
      safeMinimum: area.safeMinimum,
      bedStep: area.bedStep,
      alertLimit: area.alertLimit,
    })),
    undecided: null,
    planningRisk: site.planningRisk,
    shifts: shiftsBetween(zone, site.shifts, now, now + hoursLookedAt * hour),
    arrivalsSince: null,
    seed: 1,
    replications: 10_000,
  };
}

/** Six areas: the site's own, and its largest once more, so that the figure is for the size that is asked for. */
function sixAreas(wire: ExactWire): ExactWire {
  const largest = wire.areas.reduce((a, b) => (b.staffedBeds[0].beds > a.staffedBeds[0].beds ? b : a));
  return { ...wire, areas: [...wire.areas, { ...largest, areaId: 'once-more' }].slice(0, 6) };
}

/**
 * What a drag on the What if page costs, apart from drawing it: the exact method for 6 areas × 168 hours with arrivals
 * changed everywhere, which is the change that keeps nothing; and the smallest change with it.
 * @param model the demo site's fitted models @param now a full hour, UTC seconds
 */
export function whatIfBenches(model: () => OutlookModel, now: number): Bench[] {
  return [
    {
      name: 'what if',
      run: async (): Promise<Figure[]> => {
        const input = weekInput(now);
        const wire = sixAreas(makeExactWire(model(), input));
        const exact = readExactWire(wire);
        let percent = 0;
        const drag = () => {
          percent += 1;
          return previewNeed(exact, needChangeOf([{ kind: 'demand', areaId: null, percent: percent % 60 }], wire));
        };
        const spans = inChargeSpans(input.shifts, now, input.hours[hoursLookedAt - 1]);
        const limits = wire.areas.map(
          ({ areaId }) => input.areas.find((area) => area.areaId === areaId) ?? input.areas[0],
        );
        return [
          await measure(
            {
              name: 'What if: a drag answered, 6 areas × 168 h, every law anew',
              unit: 'ms',
              better: 'lower',
              goal: 32,
            },
            async () =>
              (await milliseconds(() => {
                for (let turn = 0; turn < turns; turn += 1) drag();
              })) / turns,
            9,
          ),
          await measure(
            {
              name: 'What if: smallest change and the risk left, 6 areas × 21 shifts',
              unit: 'ms',
              better: 'lower',
              goal: 32,
            },
            async () => {
              const need = drag();
              return milliseconds(() => {
                const areas = limits.map((area, a) => ({ ...area, laws: need[a].laws }));
                const cells = changeCells({ hours: wire.hours, spans, areas });
                smallestChange(cells, 0.1);
                riskLeft(cells, 200);
              });
            },
            9,
          ),
          await measure(
            {
              name: 'What if: as is prepared for the browser, 5 areas × 168 h',
              unit: 'ms',
              better: 'lower',
              goal: 100,
            },
            () => milliseconds(() => makeExactWire(model(), input)),
          ),
        ];
      },
    },
  ];
}

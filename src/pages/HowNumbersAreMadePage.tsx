import { useEffect } from 'react';
import type { ReactNode } from 'react';
import { useLocation } from 'react-router-dom';
import { PageHead } from '../components/PageHead.tsx';
import { RiskKey } from '../components/RiskKey.tsx';
import { sources } from './how-sources.ts';

const parts = [
  ['words', 'What the words mean'],
  ['arrivals', 'Arrivals'],
  ['stays', 'Length of stay and departures'],
  ['need', 'Need, tonight'],
  ['chances', 'Chances and words of risk'],
  ['beds', 'Beds to add, and what else would help'],
  ['limits', 'What it does not know'],
  ['checks', 'How it is checked'],
  ['cautions', 'Cautions'],
  ['sources', 'Sources'],
] as const;

function Part({ id, children }: { id: (typeof parts)[number][0]; children: ReactNode }) {
  const title = parts.find(([candidate]) => candidate === id)?.[1];
  return (
    <section id={id} aria-labelledby={`${id}-title`} className="scroll-mt-4 border-t border-hair pt-5 pb-6">
      <h2 id={`${id}-title`} tabIndex={-1} className="text-section">
        {title}
      </h2>
      {children}
    </section>
  );
}

/** /how: the method, its assumptions and limits, its sources and cautions, in words for those who plan by it. */
export function HowNumbersAreMadePage() {
  const { hash } = useLocation();
  useEffect(() => {
    if (hash) document.getElementById(hash.slice(1))?.scrollIntoView();
  }, [hash]);
  return (
    <>
      <PageHead
        tab="How the numbers are made"
        title="How the numbers are made"
        lede="What is computed, from what, what it takes for granted, and where it stops knowing."
      />
      <div className="page-pad grid gap-x-12 lg:grid-cols-[15rem_1fr]">
        <nav aria-label="Parts of this page" className="pb-6 lg:sticky lg:top-4 lg:self-start print:hidden">
          <ul className="grid gap-0.5">
            {parts.map(([id, title]) => (
              <li key={id}>
                <a href={`#${id}`} className="link inline-block min-h-7 text-side text-ink2">
                  {title}
                </a>
              </li>
            ))}
          </ul>
        </nav>
        <article className="prose-column">
          <Part id="words">
            <p>
              <b>Present</b> is everyone in an area’s care now. <b>Waiting</b> are those of them who have no bed space
              yet; <b>boarding</b> are those who are admitted and still in an ED bed space. Nobody is both.
            </p>
            <p>
              <b>Need</b> is how many patients would be in the area if bed spaces were unlimited and stays were as they
              are in the log, waiting included. <b>Shortfall</b> means that need is above staffed beds. <b>Headroom</b>{' '}
              is staffed beds less the 90th percentile of need. A night carries the date on which it starts.
            </p>
            <p>
              <b>P90</b> at an hour is the number that 90 nights in 100 stay at or under at that hour. The <b>median</b>{' '}
              is the number that about half of such nights stay at or under: the others need more.
            </p>
          </Part>
          <Part id="arrivals">
            <p>
              Patients arrive one by one, at a rate that depends on the hour of the week: 168 hours, in the site’s own
              time zone. This is a non-homogeneous Poisson process. When clocks change, the repeated hour counts twice
              and the missing hour not at all. Outages are taken out of the time that a rate is counted over.
            </p>
            <p>
              Rates are fitted for each care area. An hour of the week that was seen few times borrows from the hours
              about it, so that one odd Tuesday makes no pattern; the interval beside each rate says how much is left
              uncertain. A level follows slow growth and falls. Holidays take the shape of a weekday like them times an
              effect of their own, held close to that of all holidays until they were seen often.
            </p>
            <p>
              Real days differ by more than chance: some are busy in every area at once, and a busy day is often
              followed by another. The model carries a factor for the day that all areas share, and one for each area.
              Arrivals counted since the last entry update it, and nothing is forgotten at midnight.
            </p>
          </Part>
          <Part id="stays">
            <p>
              Patients form streams: area by disposition (home, admitted, transferred, left before treatment). Within a
              stream a patient leaves at a rate that depends on the block of the day, since patients do not leave evenly
              through the night and boarders wait for wards to empty. With the same rate all day this is the plain
              exponential law of length of stay, which the Arrival model page shows with its 95 % limits.
            </p>
            <p>
              Visits that are still going on, and stays cut at the cap of 72 hours, count as “at least this long” rather
              than being left out. Days differ in how fast patients leave as well; that factor moves need far more than
              the arrivals do, so it is estimated on its own.
            </p>
            <p>
              Stays are taken from nights with today’s doctors, tests and ward beds. If the stays in the log are far
              enough from the exponential law to move tonight’s P90 by a bed or more, Tonight uses the stays as they
              were.
            </p>
          </Part>
          <Part id="need">
            <p>
              Tonight starts from the census, each area from its own count and its time. Boarding patients leave as
              admitted ones do; the others are shared over the streams as the model expects at that hour. Patients whose
              area is not decided are shared over the areas as arrivals are. Then the night is run 10,000 times or more,
              with arrivals, stays, day factors and the uncertainty of the fit itself drawn anew each time, and all
              areas together, so that a busy night is busy everywhere.
            </p>
            <p>
              What the page shows are the percentiles of those nights. Totals are counted from the same nights; they are
              never sums of percentiles. An hour’s figures are those at its full hour, under the staffed beds in force
              then. Areas of eight spaces or fewer print the chance of any shortfall within the hour, since there one
              patient decides.
            </p>
            <p>
              Every outlook is kept as it was issued, with its inputs and its seed. Run again from them, it gives the
              same digits.
            </p>
          </Part>
          <Part id="chances">
            <p>
              The chance of an hour is the share of nights that are short at that hour. The chance of “some time
              tonight” is the share of nights that are short at any time before the shift ends: it is always at least as
              large, and often far larger. A 2 % hour can be a 30 % night. The two are never mixed.
            </p>
            <p>
              “Some area short” is the chance that at least one area is. “If beds were pooled” is need against beds as
              if every bed could take any patient; real departments lie between the two.
            </p>
            <p>
              Each word stands for a range of whole per cents, and follows from the printed figure. Likely always means
              50 % or more. With 10,000 nights a printed chance is off by a point at most, two times in three by half a
              point.
            </p>
            <div className="py-2">
              <RiskKey />
            </div>
          </Part>
          <Part id="beds">
            <p>
              Beds to add at an hour are the fewest, in the steps in which the area opens beds, that bring the chance at
              that hour to the area’s limit or under. What does not exist as a bed space is said with it. The
              alternative beside it is the number of boarding patients who would have to leave by the first hour past
              the limit for every later hour of that shift to be under it.
            </p>
            <p>
              Every bed figure prints the risk it is for. The product does not suggest fewer beds than the area’s safe
              minimum, and asks a reason for any reduction.
            </p>
          </Part>
          <Part id="limits">
            <ul>
              <li>A major incident, a sudden closure, an outbreak that has just begun: use your incident plan.</li>
              <li>
                What has never been in the log. Below two weeks of history there is no forecast, below eight weeks a
                coarse one for a day at most, and below a year it has not seen a winter.
              </li>
              <li>
                Patients who change areas: they keep one area unless area stays are loaded. More beds alone may not
                shorten stays.
              </li>
              <li>An area without a census. It is outlined and called not counted; missing never means calm.</li>
              <li>
                A census that has grown old. After two hours the page says so, after four the sentence speaks of nothing
                else first, after eight it is dropped.
              </li>
            </ul>
          </Part>
          <Part id="checks">
            <p>
              The simulation is checked against the exact law of need, hour by hour and number by number, and against
              published values of queueing theory. Intervals are checked on made-up logs whose truth is known, and on
              weeks that were kept back: of all hours, nine in ten should fall within the 90 % interval. It is compared
              with what a good spreadsheet would give: the same hour last week, the mean of the last four weeks, of the
              last year, and a regression.
            </p>
          </Part>
          <Part id="cautions">
            <ul>
              <li>
                Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical
                governance, escalation policy and local law; a licensed clinician’s judgement comes first.
              </li>
              <li>
                A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not
                foresee a major incident or a sudden closure.
              </li>
              <li>A low chance is not a reason to staff below your safe minimum.</li>
              <li>
                Minute-level times can identify people under some rules (in the US they make a limited data set, 45 CFR
                164.514(e)): follow your data-sharing agreement. Hourly counts are accepted instead.
              </li>
            </ul>
          </Part>
          <Part id="sources">
            <ul>
              {sources.map((source) => (
                <li key={source}>{source}</li>
              ))}
            </ul>
          </Part>
        </article>
      </div>
    </>
  );
}

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
  ['week-ahead', 'The week ahead'],
  ['what-if', 'What if: plans against as is'],
  ['limits', 'What it does not know'],
  ['checks', 'How it is checked'],
  ['track-record', 'Track record: how forecasts are scored'],
  ['briefs', 'The weekly brief'],
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
              Where nearly all admitted patients have an admission decision in the log, their stay is two stages: the
              time to the decision, then boarding. Each has its own pace by hour, so that wards that take nobody at
              night hold those already decided, not those still being treated.
            </p>
            <p>
              Stays are taken from nights with today’s doctors, tests and ward beds. If the stays in the log are far
              enough from the exponential law to move tonight’s P90 by a bed or more, Tonight uses the stays as they
              were.
            </p>
            <p>
              A site that may not share the times of visits loads hourly counts. Arrivals are then forecast as from
              visits. Counts do not tell how long patients stay, so the mean stay of each area is as the site states it:
              taken as right within 20 % (an assumption). Where departures are counted too, departures over
              patient-hours present, at the level that the stated mean implies by Little’s law, give the pace of leaving
              through the day and how days differ; otherwise the pace is even and days differ by 10 % (assumptions).
              Dispositions, admissions and boarding are not known then and not forecast; every page that rests on such a
              model says so.
            </p>
          </Part>
          <Part id="need">
            <p>
              Tonight starts from the census, each area from its own count and its time. Boarding patients leave as the
              wards have taken them in the log; the others are shared over the streams as the model expects at that
              hour. Those of them who will be admitted still have their decision and all of their boarding ahead, where
              the log tells when decisions fall. Patients whose area is not decided are shared over the areas as
              arrivals are. Then the night is run 10,000 times or more, with arrivals, stays, day factors and the
              uncertainty of the fit itself drawn anew each time, and all areas together, so that a busy night is busy
              everywhere.
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
            <p>
              Beds needed beside the staffed-bed plan are, for each shift of the week outlook, the fewest constant beds
              whose chance of any shortfall in the shift is at most the planning risk, in the area’s steps; of two dates
              on the same weekday the higher stands. How often an alert limit would have warned is counted over the
              nights of eight weeks: a night was warned of if the outlook that stood at its start printed a chance past
              the limit for any hour, and ran short if need was above staffed beds at any full hour. Nights of which
              either is not known are left out and counted.
            </p>
          </Part>
          <Part id="week-ahead">
            <p>
              Each morning, and whenever the model, the plan, the calendar or the site’s settings change, what is left
              of today and fourteen whole days are simulated together, 4,000 times, from the newest census, or where
              there is none from what the model expects. Within a day or two little is left of how it began.
            </p>
            <p>
              Need is taken at its highest within each shift. “Some time short” is the share of runs in which need was
              above the planned beds at any time of the shift. Beds to add are the fewest, in the area’s own steps and
              on top of the plan as it runs through the shift, that bring this share to the planning risk, and at least
              what the safe minimum lacks. The last chance to book is the shift’s lead time before its start, or the
              area’s notice where that is longer. Nurse hours follow from the site’s own ratio, or are not given.
            </p>
            <p>
              Arrivals of an hour, a shift, a day and a week each have intervals of their own, from joint draws of the
              rates: the ends of hourly intervals added up are not a day’s interval. Arrivals by ambulance are the share
              of such arrivals in the last year by area and four hours of the day, where nearly all visits say how they
              came. Admissions of a day are counted in the runs.
            </p>
            <p>
              The effect of a holiday or of a day of your own is learned from past days of that name, held close to none
              until they were seen often; without any it is the range that the site stated, and without that a guess
              that says so. Last week’s forecast stands as it was issued.
            </p>
          </Part>
          <Part id="what-if">
            <p>
              A plan changes arrivals, stays, staffed beds, boarding patients, or the areas that are open, over the next
              seven days. While you drag or type, the browser answers by the exact method: stays as exponential by
              stream and hour, the week’s busyness and the pace of departures each as one factor, the chance of
              shortfall at each full hour. “Confirm” simulates the same seven days 10,000 times, each once as it is and
              once with the plan on the same random numbers, so that what both share cancels; every difference carries
              its 95 % interval from these pairs. Its chances are those of any shortfall during a shift and are higher
              by definition. In the first hours after a census the two methods lie furthest apart, because the
              simulation knows how long patients have been there; how far is said beside each confirmed plan.
            </p>
            <p>
              Extra arrivals come on random numbers of their own, fewer are thinned by a number that each arrival
              carries, and a longer stay is the same draw stretched. More beds can therefore never raise a chance in a
              compared pair. Need does not wait for a bed: more beds alone do not shorten a stay here.
            </p>
            <p>
              Where the logs hold bed-space times and your site has stated a wait limit, waits for a bed space are
              simulated too, on Week ahead and for a confirmed plan: the planned beds, patients taken in order of
              arrival, a bed closed once its patient has left, and those who lose patience leaving. The beds for the
              limit are the fewest steps, added to one shift alone, with which no larger share of its arrivals than the
              planning risk waits longer. Without bed-space times such waits cannot be known, and the page says so.
            </p>
            <p>
              “Smallest change” takes, for each area and each shift while it is in charge, the fewest whole steps of
              beds that bring every full hour to the risk you choose; areas and shifts do not touch each other, so the
              sum is the least there is. With fewer bed-hours to give it lowers the worst hour first. It never takes a
              bed away, never goes past the bed spaces that exist, and raises an area that stands below its safe
              minimum.
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
          <Part id="track-record">
            <p>
              Every outlook is kept as it was issued, with the distributions behind it. When an accepted log tells what
              came, need is scored 1, 4, 8, 12 and 24 hours ahead for outlooks issued by the clock, and each shift’s
              highest need and each day’s arrivals for the last outlook before it began. What the daily week ahead said
              is scored too: need at every fourth hour from 25 to 72 hours ahead, shifts that begin within 72 hours, and
              the arrivals of each of the next seven days. A chance is held against the staffed beds that it was issued
              with; acknowledged hours are told apart. A withdrawn log takes its scores with it.
            </p>
            <p>
              Coverage is compared with what each interval really holds, since counts are whole. Pinball loss and the
              mean absolute scaled error stand beside three rules of the past, and beside the floor that chance leaves
              even to a forecast that is right. Standard errors come from drawing whole weeks again.
            </p>
            <p>
              Once a week the scores of the model in use are checked for what chance does not explain, by cumulative
              sums. On simulated site-years of 260 visits a day with nightly logs it spoke up wrongly 0.8 times a year,
              saw a change of level by 10 % within three weeks in 91 of 100 runs, and ranges 20 % too narrow within
              twelve in 99; with weekly logs 0.95 times, 93 and 98. At 70 visits a day with nightly logs: 0.8 times, 61
              and 98.
            </p>
            <p>
              Before a candidate is approved it can be tried beside the model in use on past weeks. Each forecasts a
              week from what it would have known before it: a model fitted earlier is itself, its level moved on; before
              the end of its own visits it is the fit that its method would have made then. The same weeks, counts and
              random numbers serve both, and a difference is called one only past two standard errors, those of
              resampled weeks and of the simulation together.
            </p>
          </Part>
          <Part id="briefs">
            <p>
              What is to come in a brief is the newest week outlook: arrivals with their range, and the shifts whose
              chance of any shortfall passes the planning risk, with the beds that would bring it there and the last
              chance to book. What has been is counted from the accepted logs and the censuses, beside the means of four
              weeks and of a year.
            </p>
            <p>
              Past counts of people under the site’s minimum are kept back, and so many others with them that nobody can
              work them out by subtraction. Forecasts are not counts of people and stand as they are.
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
                164.514(e)): follow your data-sharing agreement.
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

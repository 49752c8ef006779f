import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { MailPicture } from '../../mail/mail-picture.ts';
import type { SectionFacts } from './brief-section.ts';
import { number, writingOf, type hindsightRows } from './brief-words.ts';

/** What a section says, once, for its text and its HTML. */
export interface SectionWords {
  headline: string;
  arrivals: string;
  risks: { name: string; need: string; cover: string; add: string }[];
  moreRisks: string | null;
  area: { id: string; name: string } | null;
  hindsight: ReturnType<typeof hindsightRows>;
  done: string;
  scores: string;
  changes: string[];
  cautions: string[];
  chart: { cid: string; alt: string; picture: MailPicture } | null;
}

/** A brief's frame beside its sections. */
export interface BriefFrame {
  /** The site, or the health group. */
  name: string;
  covers: 'site' | 'group';
  composedAt: number;
  baseUrl: string;
}

export function weekLink({ baseUrl }: BriefFrame, { site }: SectionFacts): string {
  return `${baseUrl}/sites/${encodeURIComponent(site.id)}/week`;
}

export function smallNote(sections: readonly SectionFacts[]): string {
  const least = Math.max(...sections.map(({ site }) => site.smallNumberMinimum));
  return `Counts of fewer than ${number(least)} people, and others that would give them away, are not shown; means are whole numbers.`;
}

export function sentLine(frame: BriefFrame, timeZone: string): string {
  const writing = writingOf(makeZone(timeZone));
  return `Composed ${writing.moment(frame.composedAt)} by the time of ${frame.covers === 'site' ? 'the site' : 'the first site'}. Figures may have changed since.`;
}

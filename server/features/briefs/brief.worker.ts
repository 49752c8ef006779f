import { addHindsight } from './add-hindsight.ts';
import type { ComposedBrief, SectionInput } from './brief-section.ts';
import type { BriefFrame } from './brief-frame.ts';
import { writeBrief } from './write-brief.ts';

/** What composing a brief needs; plain, so that a thread can be handed it. */
export interface BriefRequest {
  databaseFile: string;
  frame: BriefFrame;
  sections: SectionInput[];
}

/** Looks back, forecasts where nothing else has, writes the parts of the message and draws its pictures. */
export default function compose({ databaseFile, frame, sections }: BriefRequest): ComposedBrief {
  return writeBrief(
    frame,
    sections.map((section) => addHindsight(databaseFile, section, frame.composedAt)),
  );
}

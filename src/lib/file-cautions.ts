/** At the head of every file that leaves the product, as on its pages. */
export const fileCautions: readonly string[] = [
  'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
  'A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not foresee a major incident or a sudden closure: use your incident plan.',
  'A low chance is not a reason to staff below your safe minimum.',
];

/** "Arrivals of Acute, hour by hour" as a file's name: "arrivals-of-acute-hour-by-hour". */
export function fileNameOf(text: string): string {
  return text
    .toLowerCase()
    .replaceAll(/[^a-z0-9]+/g, '-')
    .replaceAll(/^-+|-+$/g, '')
    .slice(0, 80);
}

/** What audited events are about: the part of an event's name before its first dot, in words. */
export const auditTopics = {
  person: 'People and sign-in',
  role: 'Roles',
  'group-role': 'Roles by the provider’s groups',
  site: 'Sites and their settings',
  area: 'Care areas',
  census: 'Census',
  risk: 'Risks acknowledged',
  'staffed-beds': 'Staffed beds',
  'visit-log': 'Visit logs',
  'exposure-gap': 'Outages and diversions',
  'arrival-model': 'Arrival model',
  scenario: 'What if',
  brief: 'Briefs',
  token: 'Machine tokens',
  mail: 'Mail',
  job: 'Background work',
  backup: 'Backups',
  'audit-note': 'Notes taken out',
} as const;

/** "visit-log.accepted" as "Visit log: accepted". */
export function auditEventInWords(event: string): string {
  const [topic, ...rest] = event.split('.');
  const words = (text: string) => text.replaceAll('-', ' ');
  const head = words(topic);
  const tail = words(rest.join(' '));
  return `${head.charAt(0).toUpperCase()}${head.slice(1)}${tail === '' ? '' : `: ${tail}`}`;
}

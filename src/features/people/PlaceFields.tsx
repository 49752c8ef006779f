import { roleNames, roles, type Role } from '../../../shared/domain/permission.ts';
import { SelectField } from '../../components/Field.tsx';
import type { PlaceWish } from './queries.ts';

export interface Choices {
  sites: readonly { id: string; name: string; timeZone: string }[];
  groups: readonly { id: string; name: string }[];
}

/** What is chosen so far: the place is "site ID", "group ID" or nothing yet. */
export interface PlaceDraft {
  role: Role;
  place: string;
}

export const emptyPlace: PlaceDraft = { role: 'charge', place: '' };

/** The wish that a draft makes; null while the place is missing. */
export function placeOf({ role, place }: PlaceDraft): PlaceWish | null {
  if (role === 'administrator') return { role, siteId: null, groupId: null };
  const [kind, id] = place.split(' ');
  if (kind === 'site') return { role, siteId: id, groupId: null };
  return kind === 'group' && role === 'executive' ? { role, siteId: null, groupId: id } : null;
}

/** Chooses a role and where it holds. */
export function PlaceFields({
  choices: { sites, groups },
  draft,
  tried,
  onDraft,
}: {
  choices: Choices;
  draft: PlaceDraft;
  tried: boolean;
  onDraft: (draft: PlaceDraft) => void;
}) {
  return (
    <>
      <SelectField
        label="Role"
        value={draft.role}
        onChange={(event) => onDraft({ ...draft, role: event.target.value as Role })}
        options={roles.map((role) => ({ value: role, label: roleNames[role] }))}
      />
      {draft.role === 'administrator' ? (
        <p className="self-end pb-2 text-ink2">For the whole installation, without reading any site’s data.</p>
      ) : (
        <SelectField
          label="Where"
          value={draft.place}
          error={tried && placeOf(draft) === null ? 'Choose where the role holds.' : undefined}
          onChange={(event) => onDraft({ ...draft, place: event.target.value })}
          options={[
            { value: '', label: sites.length === 0 ? 'No site is set up yet' : 'Choose a site', disabled: true },
            ...sites.map(({ id, name }) => ({ value: `site ${id}`, label: name })),
            ...(draft.role === 'executive'
              ? groups.map(({ id, name }) => ({ value: `group ${id}`, label: `All sites of ${name}` }))
              : []),
          ]}
        />
      )}
    </>
  );
}

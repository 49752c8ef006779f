/** What a machine token lets a site's own system do, and nothing else. */
export const tokenPurposes = ['census', 'visit-log'] as const;
export type TokenPurpose = (typeof tokenPurposes)[number];

/** What each purpose is called on screen. */
export const tokenPurposeNames: Record<TokenPurpose, string> = {
  census: 'Enter a census',
  'visit-log': 'Upload visit logs',
};

/** Text in a drawing: a halo of the page, so that it reads on sand and over lines. */
export const halo = { paintOrder: 'stroke', stroke: 'var(--water)', strokeWidth: 4, strokeLinejoin: 'round' } as const;

/** A tight label gives up width, not size. */
export const labelStyle = { fontStretch: '88%' };

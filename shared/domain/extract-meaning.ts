/** What a system's arrival time marks. Common practice differs between systems; no source. */
export const arrivalMeanings = ['ambulance at the door', 'offload', 'registration', 'not known'] as const;
export type ArrivalMeaning = (typeof arrivalMeanings)[number];

/** Which of a visit's areas its care area is, where patients move between areas. */
export const areaMeanings = ['first', 'longest', 'last', 'not known'] as const;
export type AreaMeaning = (typeof areaMeanings)[number];

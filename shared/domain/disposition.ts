/** How a visit ends. The order is the code stored with a visit; never reorder, only append. */
export const dispositions = ['home', 'admitted', 'transferred', 'left before treatment'] as const;
export type Disposition = (typeof dispositions)[number];

/** The stored code of a disposition. */
export const dispositionCode: Record<Disposition, number> = {
  home: 0,
  admitted: 1,
  transferred: 2,
  'left before treatment': 3,
};

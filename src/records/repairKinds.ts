/** Slips of the pen that are looked for in a record which lies where it cannot be. */
export const REPAIR_KINDS = ['longitude_sign', 'latitude_sign', 'swapped', 'swapped_sign', 'utm_zone', 'feet', 'metres', 'range_side'] as const;
export type RepairKind = (typeof REPAIR_KINDS)[number];

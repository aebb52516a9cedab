/**
 * Share of casings among all that stands out of a residual, before any reading is looked at (a working assumption: on old
 * oil fields casings are about as common as scrap). Chances of a source being a casing start from it, and whoever puts
 * records beside them has to know what they started from.
 */
export const CASING_SHARE = 0.35;

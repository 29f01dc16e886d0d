/** The sections of the report, in the order of their panels. */
export const NAMES = ["layout", "field", "near", "edge", "thinning", "split", "wear", "surfacing", "colour"];

/** The sections of the report, in the order of their panels: the lens as a body, and why a pair fails. */
export const NAMES = ["layout", "field", "near", "edge", "thinning", "split", "wear", "surfacing", "colour"];
export const WHY = ["causes", "look", "remedy"];

/** What is wrong, where, why, how to mend it, and that what was typed is kept. */

import { has, say, shown } from "./words.js";

/** @typedef {import("./types.js").Fault} Fault */

/** @param {Fault} fault one that only asks for what is not there yet */
export function isAsk(fault) {
  return /-missing$/.test(fault.code) || (!fault.given && /^(choose|write)-/.test(fault.fix ?? ""));
}

/** @param {Fault} fault the sentence of the error and that of its remedy */
export function faultText(fault) {
  const params = { given: fault.given, ...fault.params };
  const fix = fault.fix && has(`fixes.${fault.fix}`) ? say(`fixes.${fault.fix}`, params) : "";
  return [say(`errors.${fault.code}`, params), fix].filter(Boolean).join(" ");
}

/** @param {Fault} fault a short name of the place, for the summary */
export function faultPlace(fault) {
  return shown(fault.params?.["field_name"] ?? fault.field) || say("page.problems.somewhere");
}

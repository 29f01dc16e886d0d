/**
 * The shapes that come from the core, as far as the page looks at them. Numbers that a person sees
 * come as text under `shown`; the page never computes with the others.
 *
 * @typedef {Record<string, string>} Entries Typed text by path, e.g. {"right.sphere": "-2.25"}.
 *
 * @typedef {object} Fault
 * @property {string} code
 * @property {string} field
 * @property {string} given
 * @property {Record<string, string>} params
 * @property {string} fix
 *
 * @typedef {object} Note
 * @property {string} code
 * @property {string} field
 * @property {Record<string, string>} params
 * @property {"warning"|"note"|"ask"} severity
 * @property {string} about
 *
 * @typedef {{code: string, params?: Record<string, string>}} Said A sentence by its code.
 *
 * @typedef {Record<string, string>} Shown
 *
 * @typedef {object} Prism
 * @property {string} quadrant
 * @property {{base: string|null}} horizontal
 * @property {Shown} shown
 *
 * @typedef {object} CompensatorSetting
 * @property {Prism} residual
 * @property {boolean} beyond_maximum
 * @property {Shown} shown
 *
 * @typedef {object} LensReport
 * @property {Prism|null} prescribed
 * @property {Prism|null} thinning
 * @property {Prism|null} expected
 * @property {string} [expected_known]
 * @property {boolean} [stated_used]
 * @property {boolean} [partner]
 * @property {{plus_form: {shown: Shown}, minus_form: {shown: Shown}, shown: Shown}|null} [power]
 * @property {({task: string} & Said)|null} [point]
 * @property {boolean|null} [on_rings]
 * @property {{needed: boolean, sense: string, full: CompensatorSetting|null, onto_rings: CompensatorSetting|null}|null} [compensator]
 * @property {{key: string, horizontal: {shown: string}, vertical: {shown: string}}|null} [meter]
 * @property {Prism|null} [read]
 * @property {Prism|null} [error]
 * @property {{count: number, from: "readings"|"bench", shown: Shown}|null} [spread]
 * @property {Record<string, string>} [step_bases] the base that a step of the target to each side leads to
 *
 * @typedef {object} Check
 * @property {string} id
 * @property {string} group
 * @property {string} eye
 * @property {string|null} component
 * @property {boolean} counts
 * @property {string} outcome
 * @property {string} clause
 * @property {string} provenance
 * @property {boolean} measured
 * @property {string} unit
 * @property {string} row
 * @property {Shown} shown
 *
 * @typedef {object} Verdict
 * @property {string} outcome
 * @property {number|null} tightest
 * @property {Check[]} checks
 * @property {Said[]} not_checked
 * @property {Said} sentence
 * @property {{id: string, name: string, sha256: string, provenance: string[], rule: string, options: {id: string, value: string, default: boolean, why: string}[]}} edition
 * @property {string[]} cautions
 *
 * @typedef {object} PairPart
 * @property {Shown} shown
 *
 * @typedef {Record<string, any> & {role: string, kind: string}} Shape
 * @typedef {{unit: string, extent: [number, number, number, number], shapes: Shape[]}} Scene
 *
 * @typedef {object} Report
 * @property {"wedgewright.report/1"} format
 * @property {number} sequence
 * @property {LensReport} [right]
 * @property {LensReport} [left]
 * @property {{vertical?: PairPart, horizontal?: PairPart, thinning_found?: {shown: string}}} [pair]
 * @property {Verdict} [verdict]
 * @property {{steps: Record<string, string>, checked_on: string|null}} [instrument]
 * @property {({eye: string} & Said)|null} [read_first]
 * @property {Record<string, string>} [echo]
 * @property {Record<string, string[]>} [order_lines]
 * @property {Note[]} notes
 * @property {Record<string, {dial: Scene, close: Scene}>} [scenes]
 * @property {{program: string, contract: number, edition_sha256: string}} made_by
 * @property {string} [text]
 *
 * @typedef {{format: string, sequence: number, errors: Fault[]}} Refusal
 *
 * @typedef {"right"|"left"} Eye
 *
 * @typedef {ReturnType<typeof import("./engine.js").startEngine>} Engine
 */

/** @type {readonly Eye[]} Right first: it lies on the left side of the screen, as the pair faces you. */
export const EYES = ["right", "left"];

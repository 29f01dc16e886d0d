/**
 * Pyodide's scripts without what nothing here uses: two thirds of them serve packages that are compiled apart and loaded
 * later, and drawing on a canvas. They are read by the browser several times at every start, so their length is time.
 *
 * What goes is known, not guessed: entries of three lists whose names the program does not have or nobody asks for; then
 * `terser` takes away what no longer has a use. The texts of what stays are not changed.
 */
import { minify } from "terser";

/**
 * When Python starts, this function makes a helper outside of Python's memory and leaves its number inside: in a snapshot
 * the number would point to nothing. So it leaves none while a snapshot is made, and is called again, by the name given
 * here, when one has been loaded.
 */
const TRAMPOLINE = {
  original: "function _PyEM_InitTrampoline_js(){",
  changed:
    "Module.initTrampoline=_PyEM_InitTrampoline_js;function _PyEM_InitTrampoline_js(){if(Module.API.config._makeSnapshot)return;",
};

/** Each export of the program by name; a name that stands only here is not used. */
export const EXPORT_LIST = /var [\w$]+=Module\["[\w$]+"\]=wasmExports\["([\w$]+)"\];/g;
const IMPORT_LIST = /var wasmImports=\{([^}]*)\};/;
const SIGNATURE = /\b([\w$]+)\.sig="\w*";/g;
const SHOWN = /Module\["([\w$]+)"\]=([\w$]+);/g;
const ASKED = /(?:\.|\[")([\w$]+)/g;
/** Never carried out, since the page's policy forbids it; said in full so that `terser` need not fear what it could see. */
const EVAL = /(?<![\w.$])eval\(/g;

/**
 * @param {string} text
 * @param {string} original
 * @param {string} changed
 */
function replaceOnce(text, original, changed) {
  if (text.split(original).length !== 2) {
    throw new Error(`Pyodide's scripts must hold exactly once: ${original}`);
  }
  return text.replace(original, () => changed);
}

/** How often each name is asked of any object, the module being known under several names. @param {string} text */
function asked(text) {
  /** @type {Map<string, number>} */
  const counts = new Map();
  for (const [, name = ""] of text.matchAll(ASKED)) {
    counts.set(name, (counts.get(name) ?? 0) + 1);
  }
  return counts;
}

/**
 * @param {string} scripts
 * @param {{imports: Set<string>, exports: Set<string>}} program the names that the program takes and gives
 * @returns {Promise<string>}
 */
export async function usedScripts(scripts, { imports, exports }) {
  const isTaken = (/** @type {string} */ name) => imports.has(name) || imports.has(name.replace(/^_/, ""));
  let text = replaceOnce(scripts, TRAMPOLINE.original, TRAMPOLINE.changed);
  text = text.replace(EXPORT_LIST, (entry, name) => (exports.has(name) ? entry : ""));
  text = text.replace(IMPORT_LIST, (_, list) => {
    const kept = list.split(",").filter((/** @type {string} */ entry) => imports.has(entry.replace(/:.*/, "")));
    return `var wasmImports={${kept.join(",")}};`;
  });
  text = text.replace(SIGNATURE, (entry, name) => (isTaken(name) ? entry : ""));
  const counts = asked(text);
  text = text.replace(SHOWN, (entry, name, value) => (name === value && counts.get(name) === 1 ? "" : entry));
  text = text.replace(EVAL, "globalThis.eval(");
  const { code } = await minify(text, {
    compress: { defaults: false, unused: true, dead_code: true, side_effects: true, passes: 4 },
    mangle: false,
    format: { comments: false },
  });
  return code ?? "";
}

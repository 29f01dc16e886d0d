// node install_wheel.mjs MICROPIP.whl CORE.whl: installs the core in a stock Pyodide and prints what it answers.
import { readFile } from "node:fs/promises";
import { basename } from "node:path";
import { loadPyodide } from "../../web/node_modules/pyodide/pyodide.mjs";

const [micropip, core] = process.argv.slice(2);
const pyodide = await loadPyodide();
pyodide.unpackArchive(new Uint8Array(await readFile(micropip)), "wheel");
pyodide.FS.writeFile(`/tmp/${basename(core)}`, await readFile(core));
await pyodide.runPythonAsync(`
import micropip
await micropip.install("emfs:/tmp/${basename(core)}")
`);
console.log(pyodide.runPython(`
from pycore.api import handle
handle('{"format": "wedgewright.request/1", "do": "demonstration"}')
`));

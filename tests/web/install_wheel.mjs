// node install_wheel.mjs PYODIDE_FOLDER MICROPIP.whl CORE.whl: installs the core in a stock Pyodide and prints what it says.
import { readFile } from "node:fs/promises";
import { basename, join } from "node:path";
import { pathToFileURL } from "node:url";

const [folder, micropip, core] = process.argv.slice(2);
const { loadPyodide } = await import(pathToFileURL(join(folder, "pyodide.mjs")).href);
const pyodide = await loadPyodide();
pyodide.unpackArchive(new Uint8Array(await readFile(micropip)), "wheel");
pyodide.FS.writeFile(`/tmp/${basename(core)}`, await readFile(core));
await pyodide.runPythonAsync(`
import micropip
await micropip.install("emfs:/tmp/${basename(core)}")
`);
console.log(pyodide.runPython(`
import decimal, json, platform, zlib
from pyexpat import EXPAT_VERSION
from pycore.api import handle
request = '{"format": "wedgewright.request/1", "do": "demonstration"}'
versions = {
    "CPython": platform.python_version(),
    "libmpdec": decimal.__libmpdec_version__,
    "zlib": zlib.ZLIB_RUNTIME_VERSION,
    "Expat": EXPAT_VERSION.removeprefix("expat_"),
}
json.dumps({"answer": json.loads(handle(request)), "installed": sorted(micropip.list()), "versions": versions})
`));

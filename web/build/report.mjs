/**
 * Prints the demonstration job's report, computed by the engine that lies in the built folder: the same function and the
 * same payloads as in the page, here under Node.
 *
 *     node web/build/report.mjs dist [snapshot | python]
 */
import { startBuiltEngine } from "./run-engine.mjs";

/** @param {{errors: {code: string}[]}} answer */
function failWith(answer) {
  throw new Error(`The engine refused the demonstration job: ${JSON.stringify(answer.errors)}`);
}

const { ask, exit } = await startBuiltEngine(process.argv[2], process.argv[3] === "python" ? "python" : "snapshot");
const demonstration = await ask({ do: "demonstration" });
const answer = demonstration.job ? await ask({ do: "report", job: demonstration.job, text: true }) : demonstration;
if (typeof answer.text !== "string") {
  failWith(answer);
}
console.log(answer.text);
exit(0);

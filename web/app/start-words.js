/** How the engine was started, in words: what lasts, and on the bench's page all of it. */
import { say } from "./words.js";

/** @typedef {import("./engine.js").Start} Start */

/** @param {Start} start */
export function startSentences({ mode, source, why }) {
  const from = source === "snapshot" ? "from_snapshot" : `from_library_${why}`;
  return [say(`page.engine.${from}`), ...(mode === "main-thread" ? [say("page.engine.main_thread")] : [])];
}

/**
 * What stands beside the job's name: only what the person at the bench will notice.
 *
 * @param {string} code the engine's state
 * @param {Start} start
 */
export function startStatus(code, start) {
  if (code === "failed") return say("page.engine.failed");
  const usual = start.source === "snapshot" && start.mode === "worker";
  return code !== "ready" || usual ? "" : startSentences(start).join(" ");
}

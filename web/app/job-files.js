/** Jobs as files: written out, read in. */

import { download, fileName } from "./files.js";
import { fromJob, guestJob, readJobFile, toJob } from "./job.js";

/** @param {import("./state.js").State} state */
export function jobFiles(state) {
  function exportFile() {
    download(fileName(state.entries["id"]), `${JSON.stringify(toJob(state.entries).job, null, 1)}\n`);
  }

  /** @param {string} text @returns {string} "" or what was wrong with it */
  function importText(text) {
    let job;
    try {
      job = readJobFile(text);
    } catch {
      return "not_json";
    }
    if (!job || typeof job !== "object" || /** @type {any} */ (job).format !== "wedgewright.job/1") return "not_a_job";
    state.replace(guestJob(state.entries, fromJob(job)));
    return "";
  }

  return { exportFile, importText };
}

/** Files and the clipboard. */

/** @param {string} name @param {string} text */
export function download(name, text) {
  const url = URL.createObjectURL(new Blob([text], { type: "application/json" }));
  const link = document.createElement("a");
  link.href = url;
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(url), 10000);
}

/** @param {string|undefined} id a file's name out of what a person called the job */
export function fileName(id) {
  const plain = (id ?? "").replace(/[^\w-]+/g, "-").replace(/^-+|-+$/g, "");
  return `job-${plain || "unnamed"}.json`;
}

/** @param {string} text @returns {Promise<boolean>} whether the clipboard took it */
export async function copyText(text) {
  try {
    await navigator.clipboard.writeText(text);
    return true;
  } catch {
    return false;
  }
}

/** Puts the styles on where a server sends the style files under a wrong type, for which browsers refuse them. */
import { loadScript } from "./boot.js";

/** Nothing where they were taken: a script that waits for the page, as ours does, waits for its styles as well. */
export async function mendStyles() {
  // A sheet that was refused is still listed, so a size that the styles set is looked for.
  if (getComputedStyle(document.documentElement).getPropertyValue("--target")) return;
  await loadScript("styles.js");
  const { screen, print } = /** @type {any} */ (globalThis).wedgewrightStyles;
  document.adoptedStyleSheets = Object.entries({ screen, print }).map(([name, text]) => {
    const sheet = new CSSStyleSheet(name === "print" ? { media: "print" } : {});
    sheet.replaceSync(text);
    return sheet;
  });
}

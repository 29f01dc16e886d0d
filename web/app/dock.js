/** What stays at the foot of the screen must not cover the field in use, nor take the screen where there is little. */

import { byId } from "./dom.js";

const MOST_OF_SCREEN = 0.35;

/** @returns {HTMLElement|null} the text field in use */
function fieldInUse() {
  const active = document.activeElement;
  return active instanceof HTMLElement && active.matches("input[type=text], textarea") ? active : null;
}

/** Keeps the page's scroll margin as high as the dock, at every change of its size and of the screen's. */
export function watchDock() {
  const dock = byId("dock");
  const root = document.documentElement;
  const measure = () => {
    const height = dock.offsetHeight;
    const open = root.classList.contains("pad-open");
    const inTheWay = !open && height > MOST_OF_SCREEN * window.innerHeight;
    root.classList.toggle("dock-flows", inTheWay);
    root.style.setProperty("--dock", inTheWay ? "0px" : `${height}px`);
    const field = fieldInUse();
    const box = field?.getBoundingClientRect();
    if (box && (box.top < 0 || box.bottom > window.innerHeight - (inTheWay ? 0 : height))) field?.scrollIntoView({ block: "nearest" });
  };
  new ResizeObserver(measure).observe(dock);
  window.addEventListener("resize", measure);
}

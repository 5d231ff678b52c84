import type { Plot } from "./plot";
import type { Structure } from "./structure";
import { parseRegions } from "./window";

/**
 * Everything on the page that leads to a place in the spectrum (findings, ledger rows, other substances, left-over regions)
 * is a button with data-regions, data-name and, for proton groups, data-atoms. Pressing it shows the region, marks the atoms
 * and stays pressed, so that the page says what the plot shows.
 */
export function mountPlaces(plot: Plot, structure: Promise<Structure | null>): void {
  const buttons = [...document.querySelectorAll<HTMLButtonElement>("button[data-regions]")];
  for (const button of buttons) {
    button.addEventListener("click", () => {
      for (const other of buttons) other.setAttribute("aria-pressed", String(other === button));
      plot.show(parseRegions(button.dataset["regions"]), button.dataset["name"] ?? "");
      const atoms = (button.dataset["atoms"] ?? "").split(",").map(Number).filter((n) => n > 0);
      void structure.then((s) => s?.mark(atoms));
      bringIntoView();
    });
  }
}

/** On narrow or low screens the plot does not stay in view by itself; it is brought back, gently where motion is welcome. */
function bringIntoView(): void {
  const figure = document.querySelector<HTMLElement>("[data-plot-figure]");
  if (!figure) return;
  const box = figure.getBoundingClientRect();
  if (box.top >= 0 && box.top < 0.5 * innerHeight) return;
  const calm = matchMedia("(prefers-reduced-motion: reduce)").matches;
  figure.scrollIntoView({ block: "start", behavior: calm ? "auto" : "smooth" });
}

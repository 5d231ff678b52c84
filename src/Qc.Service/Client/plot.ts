import uPlot from "uplot";
import "uplot/dist/uPlot.min.css";
import * as api from "./api";
import { type Window, around, move, parseRegions, width, within, zoom } from "./window";

/** Shows regions of the spectrum; findings and ledger rows use it. */
export interface Plot {
  show(regions: readonly Window[], name: string): void;
}

/** Share of the canvas height kept for the left-over curve, which has a band and a zero line of its own. */
const LeftOverBand = 0.22;

/** Distances between ticks in ppm that can be written without rounding. */
const Steps = [0.001, 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10];

/** A shift with its minus sign as printed, and no negative zero. */
const signed = (value: number, decimals: number): string => value.toFixed(decimals).replace(/^-(?=0\.?0*$)/, "").replace("-", "−");

/** The spectrum of a lot: measured, modelled and left-over curve on one zoomable canvas. */
export function mountPlot(figure: HTMLElement): Plot {
  const lot = figure.dataset["lot"]!;
  let spectrum = figure.dataset["spectrum"]!;
  const stage = figure.querySelector<HTMLElement>("[data-stage]")!;
  const status = figure.querySelector<HTMLElement>("[data-status]")!;

  let chart: uPlot | null = null;
  let whole: Window = { low: 0, high: 10 };
  let view: Window = whole;
  let height = 1;
  let selected: readonly Window[] = [];
  let selectedName = "";
  let pending: AbortController | null = null;
  let timer = 0;

  const colour = (name: string) => getComputedStyle(figure).getPropertyValue(name).trim();
  const plotHeight = () => Number.parseInt(getComputedStyle(stage).height, 10) || 320;

  async function load(part: Window | null): Promise<void> {
    pending?.abort();
    pending = new AbortController();
    try {
      const points = Math.round(Math.max(800, stage.clientWidth * Math.min(devicePixelRatio, 2) * 2));
      const trace = await api.trace(lot, spectrum, points, part && withMargin(part), pending.signal);
      const ppm = trace.ppm.slice().reverse();
      const first = ppm[0];
      const last = ppm[ppm.length - 1];
      if (first === undefined || last === undefined) {
        say("The spectrum has no points in this window.");
        return;
      }
      if (!part) view = whole = { low: first, high: last };
      const data: uPlot.AlignedData = [
        ppm, trace.modelled.slice().reverse(), trace.measured.slice().reverse(), trace.leftOver.slice().reverse(),
      ];
      if (chart) chart.setData(data, false);
      else chart = create(data);
      draw();
    } catch (cause) {
      if (cause instanceof DOMException && cause.name === "AbortError") return;
      say(cause instanceof Error ? cause.message : "The spectrum could not be loaded.");
    }
  }

  /** A little more than is seen, so that a small move shows no empty edge before the next answer. */
  const withMargin = (w: Window): Window =>
    within({ low: w.low - 0.15 * width(w), high: w.high + 0.15 * width(w) }, whole);

  function create(data: uPlot.AlignedData): uPlot {
    const options: uPlot.Options = {
      width: stage.clientWidth,
      height: plotHeight(),
      legend: { show: false },
      padding: [8, 12, 0, 12],
      cursor: { y: false, points: { show: false }, drag: { x: true, y: false, setScale: false, dist: 4 } },
      scales: {
        x: { time: false, dir: -1, range: () => [view.low, view.high] },
        y: { range: (u) => signalRange(u) },
        rest: { range: (u) => restRange(u) },
      },
      axes: [
        {
          stroke: () => colour("--ink"), ticks: { stroke: () => colour("--ink"), width: 1, size: 5 }, grid: { show: false },
          font: `13px ${colour("--font")}`, size: 36, space: 60, incrs: [...Steps],
          values: (_, splits, __, ___, step) => splits.map((v) => signed(v, Math.max(0, Math.ceil(-Math.log10(step) - 1e-9)))),
        },
        { show: false },
      ],
      series: [
        {},
        // The model lies as broad dashes under the measured line: where they agree both are seen, where not the dashes stand alone.
        { label: "modelled", scale: "y", stroke: () => colour("--model"), width: 3.5, dash: [9, 6], points: { show: false } },
        { label: "measured", scale: "y", stroke: () => colour("--ink"), width: 1, points: { show: false } },
        { label: "left over", scale: "rest", stroke: () => colour("--soft"), width: 1, points: { show: false } },
      ],
      hooks: { drawClear: [shade], setSelect: [dragged], setCursor: [readOut] },
    };
    return new uPlot(options, data, stage);
  }

  /** Signal fills the part above the left-over band; zero sits a little above the band. */
  function signalRange(u: uPlot): [number, number] {
    const top = greatest(u, [1, 2]) / height;
    const unit = top / (1 - LeftOverBand - 0.06);
    return [-(LeftOverBand + 0.02) * unit, top * 1.03];
  }

  /** The left-over curve keeps the scale of the signal, moved down: equal heights mean equal signal. */
  function restRange(u: uPlot): [number, number] {
    const [low, high] = signalRange(u);
    const shift = low + (high - low) * (LeftOverBand / 2);
    return [low - shift, high - shift];
  }

  /** Greatest value within the view of the series named. */
  function greatest(u: uPlot, series: readonly number[]): number {
    const xs = u.data[0];
    let top = 0;
    for (const s of series) {
      const ys = u.data[s]!;
      for (let i = 0; i < xs.length; i++) {
        const x = xs[i]!;
        if (x >= view.low && x <= view.high) top = Math.max(top, ys[i] ?? 0);
      }
    }
    return top > 0 ? top : 1;
  }

  /** Shades the selected regions, below the curves. */
  function shade(u: uPlot): void {
    const { ctx, bbox } = u;
    ctx.save();
    ctx.beginPath();
    ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
    ctx.clip();
    for (const region of selected) {
      const left = u.valToPos(region.high, "x", true);
      const right = u.valToPos(region.low, "x", true);
      ctx.fillStyle = colour("--shade");
      ctx.fillRect(left, bbox.top, Math.max(2, right - left), bbox.height);
      ctx.strokeStyle = colour("--accent");
      ctx.lineWidth = devicePixelRatio;
      ctx.strokeRect(left, bbox.top - 2, Math.max(2, right - left), bbox.height + 4);
    }
    for (const scale of ["y", "rest"]) {
      const zero = u.valToPos(0, scale, true);
      ctx.strokeStyle = colour("--rule");
      ctx.lineWidth = devicePixelRatio;
      ctx.beginPath();
      ctx.moveTo(bbox.left, zero);
      ctx.lineTo(bbox.left + bbox.width, zero);
      ctx.stroke();
    }
    ctx.restore();
  }

  function dragged(u: uPlot): void {
    const { left, width: wide } = u.select;
    if (wide < 4) return;
    const a = u.posToVal(left, "x");
    const b = u.posToVal(left + wide, "x");
    u.setSelect({ left: 0, top: 0, width: 0, height: 0 }, false);
    go({ low: Math.min(a, b), high: Math.max(a, b) });
  }

  const pointer = figure.querySelector<HTMLElement>("[data-pointer]");
  function readOut(u: uPlot): void {
    if (!pointer) return;
    const left = u.cursor.left ?? -1;
    pointer.textContent = left < 0 ? "" : `${signed(u.posToVal(left, "x"), 3)} ppm`;
  }

  function draw(): void {
    if (!chart) return;
    chart.batch(() => {
      chart!.setScale("x", { min: view.low, max: view.high });
      chart!.redraw(false, true);
    });
    say(describe());
  }

  function describe(): string {
    const shown = `Shown: ${signed(view.high, 2)} to ${signed(view.low, 2)} ppm`;
    const scaled = height > 1.01 || height < 0.99 ? `, height × ${height.toPrecision(2)}` : "";
    return selectedName ? `${shown}${scaled}. Marked: ${selectedName}.` : `${shown}${scaled}.`;
  }

  function say(text: string): void {
    status.textContent = text;
  }

  /** Shows a window at once from what is loaded, and sharpens it with the next answer. */
  function go(next: Window): void {
    view = zoom(within(next, whole), whole, 1, 0.5 * (next.low + next.high));
    draw();
    window.clearTimeout(timer);
    timer = window.setTimeout(() => void load(width(view) >= width(whole) ? null : view), 120);
  }

  function scale(factor: number): void {
    height = Math.min(Math.max(height * factor, 0.25), 4096);
    draw();
  }

  const centre = () => 0.5 * (view.low + view.high);
  const actions: Record<string, () => void> = {
    "closer": () => go(zoom(view, whole, 0.6, centre())),
    "wider": () => go(zoom(view, whole, 1 / 0.6, centre())),
    "left": () => go(move(view, whole, 0.25)),
    "right": () => go(move(view, whole, -0.25)),
    "taller": () => scale(2),
    "lower": () => scale(0.5),
    "whole": () => {
      height = 1;
      selected = [];
      selectedName = "";
      go(whole);
    },
  };
  const keys: Record<string, string> = {
    "+": "closer", "=": "closer", "-": "wider", "ArrowLeft": "left", "ArrowRight": "right", "ArrowUp": "taller", "ArrowDown": "lower", "0": "whole",
  };

  stage.addEventListener("keydown", (e) => {
    const action = e.ctrlKey || e.metaKey || e.altKey ? undefined : keys[e.key];
    if (!action) return;
    e.preventDefault();
    actions[action]!();
  });
  // A wheel over the page scrolls it; over the focused plot, or with Ctrl, it zooms. Nobody is caught while scrolling by.
  stage.addEventListener("wheel", (e) => {
    if (!chart || !(e.ctrlKey || document.activeElement === stage)) return;
    e.preventDefault();
    const box = chart.over.getBoundingClientRect();
    const about = chart.posToVal(e.clientX - box.left, "x");
    if (e.shiftKey) scale(e.deltaY < 0 ? 1.25 : 0.8);
    else go(zoom(view, whole, e.deltaY < 0 ? 0.8 : 1.25, about));
  }, { passive: false });
  stage.addEventListener("dblclick", () => actions["whole"]!());
  stage.addEventListener("pointerdown", () => stage.focus({ preventScroll: true }));
  for (const button of figure.querySelectorAll<HTMLButtonElement>("button[data-plot]")) {
    button.addEventListener("click", () => actions[button.dataset["plot"]!]?.());
  }
  const choice = figure.querySelector<HTMLSelectElement>("[data-plot-spectrum]");
  choice?.addEventListener("change", () => {
    spectrum = choice.value;
    height = 1;
    void load(null);
  });
  new ResizeObserver(() => chart?.setSize({ width: stage.clientWidth, height: plotHeight() })).observe(stage);
  for (const query of ["(prefers-color-scheme: dark)", "print"]) {
    matchMedia(query).addEventListener("change", () => chart?.redraw(false, true));
  }

  const named = parseRegions(figure.dataset["show"]);
  void load(null).then(() => {
    if (named.length > 0) show(named, figure.dataset["showName"] ?? "");
  });

  function show(regions: readonly Window[], name: string): void {
    if (regions.length === 0) return;
    selected = regions;
    selectedName = name;
    go(around(regions, whole));
  }

  return { show };
}

/** A part of the shift axis in ppm; low is always below high. Drawn with high on the left, as the trade does. */
export interface Window {
  readonly low: number;
  readonly high: number;
}

/** Never closer than this, in ppm: a fraction of any line width. */
const Narrowest = 0.01;

export const width = (w: Window): number => w.high - w.low;

/** The window scaled about a shift that keeps its place; below 1 comes closer. Stays within the whole. */
export function zoom(w: Window, whole: Window, factor: number, about: number): Window {
  const wanted = Math.min(Math.max(width(w) * factor, Narrowest), width(whole));
  const share = (about - w.low) / width(w);
  return within({ low: about - share * wanted, high: about + (1 - share) * wanted }, whole);
}

/** The window moved towards higher (positive) or lower shift by a share of its width. */
export const move = (w: Window, whole: Window, share: number): Window =>
  within({ low: w.low + share * width(w), high: w.high + share * width(w) }, whole);

/** A window that shows a region with room on both sides, so that the eye sees what surrounds it. */
export function around(regions: readonly Window[], whole: Window): Window {
  const low = Math.min(...regions.map((r) => r.low));
  const high = Math.max(...regions.map((r) => r.high));
  const room = Math.max(1.2 * (high - low), 0.12);
  return within({ low: low - room, high: high + room }, whole);
}

/** The window shifted, and cut where it must be, to lie within the whole. */
export function within(w: Window, whole: Window): Window {
  if (width(w) >= width(whole)) return whole;
  if (w.low < whole.low) return { low: whole.low, high: whole.low + width(w) };
  if (w.high > whole.high) return { low: whole.high - width(w), high: whole.high };
  return w;
}

/** "4.05,4.13;2.00,2.10" as written into the page by the server. */
export function parseRegions(text: string | undefined): Window[] {
  return (text ?? "").split(";").filter((t) => t !== "").flatMap((t) => {
    const [a, b] = t.split(",").map(Number);
    return a === undefined || b === undefined || Number.isNaN(a) || Number.isNaN(b) ? [] : [{ low: Math.min(a, b), high: Math.max(a, b) }];
  });
}

import * as api from "./api";

const Svg = "http://www.w3.org/2000/svg";

/** The drawn structure, in which atoms can be marked. */
export interface Structure {
  mark(atoms: readonly number[]): void;
}

/** Puts the drawing into the page (inline, so that it takes the ink of the page). */
export async function mountStructure(holder: HTMLElement): Promise<Structure | null> {
  try {
    const drawing = (await api.drawing(holder.dataset["product"]!)).replace(/ style=(?=["'])/g, " data-style=");
    const parsed = new DOMParser().parseFromString(drawing, "image/svg+xml");
    if (parsed.documentElement.namespaceURI !== Svg) return null;
    stylesAsAttributes(parsed.documentElement);
    // Atoms are told by their letters; in colours of their own, blue on a dark page could not be read.
    for (const name of ["fill", "stroke"]) {
      for (const element of parsed.querySelectorAll(`[${name}]:not([${name}=none])`)) element.setAttribute(name, "currentColor");
    }
    const svg = document.importNode(parsed.documentElement, true) as unknown as SVGSVGElement;
    svg.setAttribute("role", "img");
    svg.setAttribute("aria-label", holder.dataset["label"] ?? "Structure");
    holder.replaceChildren(svg);
    return { mark: (atoms) => mark(svg, atoms) };
  } catch (cause) {
    holder.textContent = cause instanceof Error ? cause.message : "The structure could not be drawn.";
    return null;
  }
}

/**
 * The content security policy refuses style attributes even while parsing; as SVG attributes the same declarations are
 * allowed.
 */
function stylesAsAttributes(svg: Element): void {
  for (const element of svg.querySelectorAll("[data-style]")) {
    const text = element.getAttribute("data-style") ?? "";
    element.removeAttribute("data-style");
    for (const declaration of text.split(";")) {
      const colon = declaration.indexOf(":");
      if (colon < 0) continue;
      const name = declaration.slice(0, colon).trim();
      const value = declaration.slice(colon + 1).trim();
      element.setAttribute(name, value);
    }
  }
}

function mark(svg: SVGSVGElement, atoms: readonly number[]): void {
  svg.querySelector("g.marks")?.remove();
  const marks = document.createElementNS(Svg, "g");
  marks.setAttribute("class", "marks");
  for (const atom of atoms) {
    const place = placeOf(svg, atom - 1);
    if (!place) continue;
    const circle = document.createElementNS(Svg, "circle");
    circle.setAttribute("cx", String(place.x));
    circle.setAttribute("cy", String(place.y));
    circle.setAttribute("r", "13");
    marks.append(circle);
  }
  svg.prepend(marks);
}

/** Where an atom lies: where its label is, else the mean of the bond ends that name it. */
function placeOf(svg: SVGSVGElement, atom: number): { x: number; y: number } | null {
  const label = [...svg.querySelectorAll<SVGGraphicsElement>(`.atom-${atom}`)].filter((e) => !/bond-/.test(e.getAttribute("class") ?? ""));
  if (label.length > 0) {
    const box = label[0]!.getBBox();
    return { x: box.x + box.width / 2, y: box.y + box.height / 2 };
  }
  const ends: { x: number; y: number }[] = [];
  const bonds = new Map<string, SVGElement[]>();
  for (const path of svg.querySelectorAll<SVGElement>(`path.atom-${atom}`)) {
    const bond = /bond-\d+/.exec(path.getAttribute("class") ?? "")?.[0];
    if (bond) bonds.set(bond, [...(bonds.get(bond) ?? []), path]);
  }
  for (const paths of bonds.values()) {
    // A bond is drawn from its first atom to its second, in two halves where an end is labelled.
    const named = [...(paths[0]!.getAttribute("class") ?? "").matchAll(/atom-(\d+)/g)].map((m) => Number(m[1]));
    const isFirst = named[0] === atom;
    const numbers = (isFirst ? paths[0]! : paths[paths.length - 1]!).getAttribute("d")?.match(/-?\d+(\.\d+)?/g)?.map(Number) ?? [];
    const [x, y] = isFirst ? numbers.slice(0, 2) : numbers.slice(-2);
    if (x !== undefined && y !== undefined) ends.push({ x, y });
  }
  if (ends.length === 0) return null;
  return { x: ends.reduce((s, e) => s + e.x, 0) / ends.length, y: ends.reduce((s, e) => s + e.y, 0) / ends.length };
}

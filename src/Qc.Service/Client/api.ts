/** A field at fault, as RFC 9457 answers name it. */
export interface FieldError {
  /** RFC 6901 pointer into the request body, e.g. "/reason". */
  readonly pointer: string;
  readonly detail: string;
}

/** Why the service refused, in words that can be shown. */
export class Refusal extends Error {
  readonly status: number;
  readonly title: string;
  readonly fields: readonly FieldError[];

  constructor(status: number, title: string, detail: string, fields: readonly FieldError[] = []) {
    super(detail);
    this.status = status;
    this.title = title;
    this.fields = fields;
  }
}

/** Curves between two shifts, from high to low ppm; decimated to the least and greatest value of each bin. */
export interface Trace {
  readonly ppm: readonly number[];
  readonly measured: readonly number[];
  readonly modelled: readonly number[];
  readonly leftOver: readonly number[];
}

export interface FindingDecision {
  readonly criterion: string;
  readonly subject: string;
  readonly accepted: boolean;
  readonly comment: string | null;
}

export interface Decision {
  readonly decision: string;
  readonly reason: string;
  readonly password: string;
  readonly findings: readonly FindingDecision[];
}

export const signIn = (user: string, password: string, code: string): Promise<void> =>
  send("POST", "/api/v1/session", { user, password, ...(code === "" ? {} : { code }) });

export const signOut = (): Promise<void> => send("DELETE", "/api/v1/session");

export const setUp = (user: string, printedName: string, password: string): Promise<void> =>
  send("POST", "/api/v1/set-up", { user, printedName, password });

export const approve = (product: string, version: string, password: string): Promise<void> =>
  send("POST", `/api/v1/products/${encodeURIComponent(product)}/specifications/${version}/approve`, { password });

/** Sends a decision; it is refused where the lot has changed since the page was read (`tag`). */
export const review = (lot: string, tag: string, decision: Decision): Promise<void> =>
  send("POST", `/api/v1/lots/${lot}/reviews`, decision, { "If-Match": tag });

/** The part of a trace between two shifts, in about `points` points; the whole where no window is given. */
export async function trace(
  lot: string, spectrum: string, points: number, window: { low: number; high: number } | null, signal: AbortSignal,
): Promise<Trace> {
  const query = new URLSearchParams({ points: String(points) });
  if (window) {
    query.set("from", window.high.toFixed(5));
    query.set("to", window.low.toFixed(5));
  }
  const url = `/api/v1/lots/${lot}/spectra/${spectrum}/trace?${query}`;
  const answer = await request(url, { headers: { Accept: "application/json" }, signal });
  return (await answer.json()) as Trace;
}

/** The numbered drawing of a product's structure, as SVG text. */
export async function drawing(product: string): Promise<string> {
  const answer = await request(`/api/v1/products/${encodeURIComponent(product)}/drawing.svg`, { headers: { Accept: "image/svg+xml" } });
  return answer.text();
}

async function send(method: string, url: string, body?: unknown, headers: Record<string, string> = {}): Promise<void> {
  const all: Record<string, string> = { Accept: "application/json", "X-Requested-With": "qc", ...headers };
  if (body !== undefined) all["Content-Type"] = "application/json";
  await request(url, { method, headers: all, ...(body === undefined ? {} : { body: JSON.stringify(body) }) });
}

async function request(url: string, options: RequestInit): Promise<Response> {
  let answer: Response;
  try {
    answer = await fetch(url, { credentials: "same-origin", ...options });
  } catch (cause) {
    if (cause instanceof DOMException && cause.name === "AbortError") throw cause;
    throw new Refusal(0, "No answer", "The service did not answer. Reload the page to see whether your action took effect, then try again.");
  }
  if (!answer.ok) throw await refusal(answer);
  return answer;
}

async function refusal(answer: Response): Promise<Refusal> {
  const plain = new Refusal(answer.status, "Refused", `The service answered with status ${answer.status}.`);
  if (!(answer.headers.get("Content-Type") ?? "").includes("json")) return plain;
  try {
    const problem = (await answer.json()) as { title?: string; detail?: string; errors?: FieldError[] };
    return new Refusal(answer.status, problem.title ?? plain.title, problem.detail ?? problem.title ?? plain.message, problem.errors ?? []);
  } catch {
    return plain;
  }
}

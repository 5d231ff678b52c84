import "@fontsource/source-sans-3/latin-400.css";
import "@fontsource/source-sans-3/latin-ext-400.css";
import "@fontsource/source-sans-3/greek-400.css";
import "@fontsource/source-sans-3/latin-600.css";
import "@fontsource/source-sans-3/latin-ext-600.css";
import "@fontsource/source-sans-3/greek-600.css";
import "./styles/ground.css";
import "./styles/document.css";
import "./styles/tables.css";
import "./styles/lot.css";
import "./styles/print.css";
import * as api from "./api";
import { mountForm, text } from "./forms";
import { mountPlaces } from "./ledger";
import { mountPlot } from "./plot";
import { mountReview } from "./review";
import { mountStructure } from "./structure";

/** The address to go on to after signing in: a path of this service only, never another site. */
function next(): string {
  const wanted = new URLSearchParams(location.search).get("ReturnUrl") ?? "/waiting";
  const url = new URL(wanted, location.origin);
  return url.origin === location.origin && wanted.startsWith("/") ? url.pathname + url.search + url.hash : "/waiting";
}

const forms: Record<string, (form: HTMLFormElement) => void> = {
  "sign-in": (form) => mountForm(form, async (data) => {
    await api.signIn(text(data, "user").trim(), text(data, "password"), text(data, "code").trim());
    location.assign(next());
  }),
  "sign-out": (form) => mountForm(form, async () => {
    await api.signOut();
    location.assign("/sign-in");
  }),
  "set-up": (form) => mountForm(form, async (data) => {
    if (text(data, "password") !== text(data, "again")) throw new Error("The two passwords differ.");
    await api.setUp(text(data, "user").trim(), text(data, "printedName").trim(), text(data, "password"));
    location.assign("/sign-in");
  }),
  "approve": (form) => mountForm(form, async (data) => {
    await api.approve(form.dataset["product"]!, form.dataset["version"]!, text(data, "password"));
    location.reload();
  }),
  "review": mountReview,
};

for (const form of document.querySelectorAll<HTMLFormElement>("form[data-form]")) {
  forms[form.dataset["form"]!]?.(form);
}

const holder = document.querySelector<HTMLElement>("[data-structure]");
const structure = holder ? mountStructure(holder) : Promise.resolve(null);
const figure = document.querySelector<HTMLElement>("[data-plot-figure]");
if (figure) mountPlaces(mountPlot(figure), structure);

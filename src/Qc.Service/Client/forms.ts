import { Refusal } from "./api";

/**
 * Sends a form through the service's API: the button rests while it runs, and a refusal is told in words beside the form and
 * beside the fields it names. Without a script the form cannot be sent, which its noscript sentence says.
 */
export function mountForm(form: HTMLFormElement, send: (form: FormData) => Promise<void>): void {
  const errors = form.querySelector<HTMLElement>("[data-errors]")!;
  const submit = form.querySelector<HTMLButtonElement>("button[type=submit]")!;
  form.addEventListener("submit", async (e) => {
    e.preventDefault();
    clear();
    submit.disabled = true;
    try {
      await send(new FormData(form));
    } catch (cause) {
      tell(cause);
    } finally {
      submit.disabled = false;
      for (const secret of form.querySelectorAll<HTMLInputElement>("input[type=password]")) {
        if (!errors.hidden) secret.value = "";
      }
    }
  });

  function clear(): void {
    errors.hidden = true;
    errors.replaceChildren();
    for (const field of form.querySelectorAll("[aria-invalid]")) {
      field.removeAttribute("aria-invalid");
    }
  }

  function tell(cause: unknown): void {
    const refusal = cause instanceof Refusal ? cause : new Refusal(0, "Not sent", cause instanceof Error ? cause.message : "Something went wrong.");
    const title = document.createElement("strong");
    title.textContent = `${refusal.title}.`;
    errors.replaceChildren(title, ` ${refusal.message}`);
    const details = refusal.fields.filter((f) => f.detail !== refusal.message);
    if (details.length > 0) {
      const list = document.createElement("ul");
      list.append(...details.map((f) => Object.assign(document.createElement("li"), { textContent: f.detail })));
      errors.append(list);
    }
    for (const field of refusal.fields) {
      form.querySelector(`[name="${CSS.escape(field.pointer.split("/")[1] ?? "")}"]`)?.setAttribute("aria-invalid", "true");
    }
    errors.hidden = false;
    errors.focus();
  }
}

/** A field's text; empty where it is missing. */
export const text = (form: FormData, name: string): string => {
  const value = form.get(name);
  return typeof value === "string" ? value : "";
};

import * as api from "./api";
import { mountForm, text } from "./forms";

/** The decision on a lot: every flag accepted or not, with reason and, as signature, the password again. */
export function mountReview(form: HTMLFormElement): void {
  const submit = form.querySelector<HTMLButtonElement>("button[type=submit]")!;
  const labels: Record<string, string> = {
    release: "Sign and release the lot",
    reject: "Sign and reject the lot",
    remeasure: "Sign and ask for a re-measurement",
  };
  const label = () => {
    const chosen = labels[text(new FormData(form), "decision")];
    if (chosen) submit.textContent = chosen;
  };
  form.addEventListener("change", label);
  label();

  mountForm(form, async (data) => {
    await api.review(form.dataset["lot"]!, form.dataset["tag"]!, {
      decision: text(data, "decision"),
      reason: text(data, "reason").trim(),
      password: text(data, "password"),
      findings: [...form.querySelectorAll<HTMLElement>("[data-criterion]")].map((row, i) => ({
        criterion: row.dataset["criterion"]!,
        subject: row.dataset["subject"]!,
        accepted: data.has(`accepted-${i}`),
        comment: text(data, `comment-${i}`).trim() || null,
      })),
    });
    location.reload();
  });
}

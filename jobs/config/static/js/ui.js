// Small help for pages that also work without it. No state of the record lives here.
"use strict";

(() => {
  const root = document.documentElement;

  // Light, dark, or as the device says; set before the first paint.
  const stored = () => {
    try {
      return localStorage.getItem("theme");
    } catch {
      return null;
    }
  };
  const wear = (theme) => {
    if (theme === "light" || theme === "dark") root.dataset.theme = theme;
    else delete root.dataset.theme;
  };
  wear(stored());

  // Says one sentence in the messages area, the way the server would.
  const say = (sentence, tags = "error") => {
    const area = document.getElementById("messages");
    if (!area) return;
    const line = document.createElement("p");
    line.className = `message ${tags}`;
    line.textContent = sentence;
    area.replaceChildren(line);
  };

  // Types one key of a number pad into its input, where the caret stands.
  const type = (input, key) => {
    if (key === "back") input.value = input.value.slice(0, -1);
    else if (key === "clear") input.value = "";
    else if (key === "sign") {
      input.value = input.value.startsWith("-")
        ? input.value.slice(1)
        : `-${input.value}`;
    } else if (key !== "." || !input.value.includes(".")) input.value += key;
    input.dispatchEvent(new Event("input", { bubbles: true }));
  };

  document.addEventListener("click", (event) => {
    const button = event.target.closest("button, [data-print]");
    if (!button) return;
    const pad = button.closest("[data-pad]");
    if (pad && button.dataset.key) {
      event.preventDefault();
      const input = document.getElementById(pad.dataset.pad);
      if (input) type(input, button.dataset.key);
    } else if (button.hasAttribute("data-print")) {
      event.preventDefault();
      window.print();
    } else if (button.dataset.wear) {
      try {
        localStorage.setItem("theme", button.dataset.wear);
      } catch {
        // A device that keeps nothing still wears it until the page is left.
      }
      wear(button.dataset.wear);
    } else if (button.dataset.opens) {
      document.getElementById(button.dataset.opens)?.showModal();
    }
  });

  // A form that cannot be taken back asks once, in its own words.
  document.addEventListener("submit", (event) => {
    const asked = event.submitter?.dataset.ask || event.target.dataset.ask;
    if (asked && !window.confirm(asked)) event.preventDefault();
  });

  // A select or box marked data-sends sends its form when it changes.
  document.addEventListener("change", (event) => {
    if (event.target.matches("[data-sends]")) event.target.form?.requestSubmit();
  });

  const attend = (within) => within.querySelector("[data-focus]")?.focus();
  document.addEventListener("DOMContentLoaded", () => attend(document));
  document.addEventListener("htmx:afterSwap", (event) => attend(event.target));
  document.addEventListener("htmx:sendError", () =>
    say("Not sent: no answer from the server. What you entered is still on this page.")
  );
  document.addEventListener("htmx:responseError", (event) =>
    say(
      event.detail.xhr.status === 403 || event.detail.xhr.status === 404
        ? "Not done: your seat on this job does not include this, or it is no longer there."
        : "Not done: the server could not do this. Look in the record before sending it again."
    )
  );
})();

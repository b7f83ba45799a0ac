// A pad of big number keys for gloves, docked at the foot while a number is asked.
// Without script, or with a keyboard, the fields are typed in as any other.
"use strict";

(() => {
  if (!window.matchMedia("(pointer: coarse)").matches) return;

  const KEYS = [
    ["7", "7"], ["8", "8"], ["9", "9"], ["back", "⌫"],
    ["4", "4"], ["5", "5"], ["6", "6"], ["sign", "±"],
    ["1", "1"], ["2", "2"], ["3", "3"], ["next", "Next"],
    [".", "."], ["0", "0"], ["clear", "Clear"], ["shut", "Done"],
  ];
  const SPOKEN = { back: "Delete the last digit", sign: "Change the sign" };

  const dock = document.createElement("div");
  dock.className = "field-dock";
  dock.hidden = true;
  dock.setAttribute("role", "group");
  dock.setAttribute("aria-label", "Number pad");
  const name = document.createElement("p");
  const pad = document.createElement("div");
  pad.className = "pad";
  for (const [key, shown] of KEYS) {
    const button = document.createElement("button");
    button.type = "button";
    button.textContent = shown;
    if (SPOKEN[key]) button.setAttribute("aria-label", SPOKEN[key]);
    // What ui.js types into the field carries data-key; moving on is done here.
    if (key === "next" || key === "shut") button.dataset.move = key;
    else button.dataset.key = key;
    pad.append(button);
  }
  dock.append(name, pad);
  document.body.append(dock);

  const fields = () =>
    [...document.querySelectorAll("input[data-number]")].filter(
      (input) => input.offsetParent !== null
    );
  let current = null;

  const open = (input) => {
    current = input;
    pad.dataset.pad = input.id;
    const label = document.querySelector(`label[for="${CSS.escape(input.id)}"]`);
    name.textContent = label?.firstChild?.textContent.trim() ?? "";
    dock.hidden = false;
    input.scrollIntoView({ block: "center" });
  };
  const shut = () => {
    dock.hidden = true;
    current = null;
  };

  for (const input of document.querySelectorAll("input[data-number]")) {
    // The pad takes the place of the device's own keyboard.
    input.inputMode = "none";
  }
  document.addEventListener("focusin", (event) => {
    const to = event.target;
    if (to.matches?.("input[data-number]")) open(to);
    // Not for a button: the page would move under the thumb before the tap is done.
    else if (to.matches?.("input, select, textarea")) shut();
  });
  // A tap on a key must not take the focus from the field.
  dock.addEventListener("pointerdown", (event) => event.preventDefault());
  dock.addEventListener("click", (event) => {
    const move = event.target.closest("[data-move]")?.dataset.move;
    if (!move || !current) return;
    if (move === "shut") {
      current.blur();
      shut();
      return;
    }
    const all = fields();
    const following = all[all.indexOf(current) + 1];
    if (following) following.focus();
    else {
      current.blur();
      shut();
    }
  });
})();

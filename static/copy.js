// Copy buttons beside the texts of a connection; without this file the texts can be selected by hand.
"use strict";

for (const area of document.querySelectorAll("textarea[readonly]")) {
  const button = document.createElement("button");
  button.type = "button";
  const name = document.querySelector(`label[for="${area.id}"]`)?.textContent ?? "text";
  button.textContent = `Copy ${name}`;
  button.addEventListener("click", async () => {
    try {
      await navigator.clipboard.writeText(area.value);
      button.textContent = "Copied";
    } catch {
      area.select();
      button.textContent = "Selected; copy with the keyboard";
    }
    setTimeout(() => { button.textContent = `Copy ${name}`; }, 2000);
  });
  area.before(button);
}

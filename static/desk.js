// The desk in a browser with scripts: posts the form after every edit and brings in what changed.
// Without this file the form posts by itself; nothing here decides anything.
"use strict";

const form = document.getElementById("desk-form");
const marks = {};
let request = null;
let timer = null;

document.documentElement.classList.add("scripted");

function field(name) {
  return form.elements.namedItem(name);
}

// Fields whose text differs from what the server last knew; absent fields are unchanged.
function changedElements() {
  return [...form.elements].filter(
    (e) => e.name && e.name !== "action" && e.type !== "hidden" && e.value !== e.dataset.known);
}

function isChanged() {
  return changedElements().length > 0;
}

function changedFields() {
  const body = new URLSearchParams();
  for (const element of changedElements()) body.append(element.name, element.value);
  body.append("revision", field("revision").value);
  body.append("structure", field("structure").value);
  body.append("shown", JSON.stringify(marks));
  return body;
}

function remember(root) {
  for (const element of root.querySelectorAll("input, select, textarea")) {
    element.dataset.known = element.value;
  }
}

function say(sentence) {
  const line = document.getElementById("message");
  if (line) line.textContent = sentence;
}

async function post(action) {
  clearTimeout(timer);
  if (!action && !isChanged()) return;
  if (request) request.abort();
  const mine = new AbortController();
  request = mine;
  const body = changedFields();
  const sent = new Map(body);
  form.setAttribute("aria-busy", "true");
  if (action) body.append("action", action);
  try {
    const answer = await fetch("/desk", { method: "POST", body, headers: { Accept: "application/json" }, signal: mine.signal });
    if (!answer.ok) {
      const page = new DOMParser().parseFromString(await answer.text(), "text/html");
      say(page.getElementById("message")?.textContent ?? "The program refused this; what you typed is still here.");
      return;
    }
    bringIn(await answer.json(), sent);
  } catch (fault) {
    if (fault.name !== "AbortError") say("The program does not answer. What you typed is still here; it is sent with the next change.");
  } finally {
    if (request === mine) {
      request = null;
      form.removeAttribute("aria-busy");
    }
  }
}

function bringIn(change, sent) {
  const focus = document.activeElement;
  const place = focus && focus.id ? { id: focus.id, from: focus.selectionStart, to: focus.selectionEnd } : null;
  for (const [name, fragment] of Object.entries(change.fragments)) {
    const holder = document.getElementById(name);
    if (name === "data") {
      const now = new Map([...form.elements].filter((e) => e.name && e.type !== "hidden").map((e) => [e.name, e.value]));
      const open = new Set([...holder.querySelectorAll("details[open]")].map((d) => d.closest("[id]").id));
      holder.innerHTML = fragment.html;
      remember(holder);
      for (const details of holder.querySelectorAll("details")) if (open.has(details.closest("[id]").id)) details.open = true;
      // what was typed while the answer was on its way stays
      for (const [field_, value] of now) {
        const element = field(field_);
        if (element && sent.has(field_) && sent.get(field_) !== value) element.value = value;
      }
    } else {
      const open = [...holder.querySelectorAll("details")].map((d) => d.open);
      holder.innerHTML = fragment.html;
      [...holder.querySelectorAll("details")].forEach((d, k) => { d.open = open[k] ?? d.open; });
    }
    marks[name] = fragment.mark;
  }
  for (const [name, value] of sent) {
    const element = field(name);
    if (element && element.type !== "hidden" && !(name in change.texts)) element.dataset.known = value;
  }
  for (const [name, value] of Object.entries(change.texts)) {
    const element = field(name);
    if (!element) continue;
    // the field keeps what was typed since; anything else follows the desk
    if (element.value === element.dataset.known || element.value === sent.get(name)) element.value = value;
    element.dataset.known = value;
  }
  field("revision").value = change.revision;
  field("structure").value = change.structure;
  showFaults(change.faults);
  if (place && document.activeElement.id !== place.id) {
    const element = document.getElementById(place.id);
    if (element) {
      element.focus({ preventScroll: true });
      if (typeof place.from === "number") element.setSelectionRange(place.from, place.to);
    }
  }
}

function showFaults(faults) {
  const byField = new Map(faults.map((fault) => [fault.field, fault]));
  for (const line of form.querySelectorAll("[id^='fault-']")) {
    const name = line.id.slice("fault-".length);
    const fault = byField.get(name);
    line.hidden = !fault;
    line.textContent = fault ? fault.message + (fault.expected ? ` Right would be: ${fault.expected}` : "") : "";
    const element = field(name);
    if (!element) continue;
    if (fault) {
      element.setAttribute("aria-invalid", "true");
      element.closest("details")?.setAttribute("open", "");
    } else {
      element.removeAttribute("aria-invalid");
    }
  }
}

form.addEventListener("input", (event) => {
  // a type is read when it is finished: at Enter, or when the field is left
  if (event.target.name === "shorthand") return;
  clearTimeout(timer);
  timer = setTimeout(() => post(""), 250);
});
form.addEventListener("change", () => {
  clearTimeout(timer);
  // a moment later, so that Enter, which submits as well, posts once
  timer = setTimeout(() => post(""), 0);
});
document.addEventListener("submit", (event) => {
  if (event.target !== form) return;
  event.preventDefault();
  const inShorthand = document.activeElement?.name === "shorthand" && event.submitter?.value === "save";
  post(inShorthand ? "read-shorthand" : event.submitter?.value ?? "save");
});

const file = document.getElementById("document-file");
if (file) {
  file.closest(".from-file").hidden = false;
  file.addEventListener("change", async () => {
    if (file.files.length) document.getElementById("document").value = await file.files[0].text();
  });
}

remember(form);

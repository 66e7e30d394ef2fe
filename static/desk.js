// The desk in a browser with scripts: posts what was edited and brings in what changed.
// Without this file the form posts by itself; nothing here decides anything.
"use strict";

const form = document.getElementById("desk-form");
const marks = {}; // what is shown of each part of the page, in the server's own words
const waiting = []; // actions pressed while another one is under way
let request = null; // the post under way: { action, abort }
let timer = null;

const field = (name) => form.elements.namedItem(name);
const texts = () => [...form.elements].filter((e) => e.name && e.name !== "action" && e.type !== "hidden");
// Only what differs from what the server last knew is posted; absent fields are unchanged.
const edited = () => texts().filter((e) => e.value !== e.dataset.known);

function remember(root) {
  for (const element of root.querySelectorAll("input, select, textarea")) element.dataset.known = element.value;
}

function say(sentence) {
  document.getElementById("message").textContent = sentence;
  delete marks.status;
}

function bodyOf(elements, action) {
  const body = new URLSearchParams(elements.map((e) => [e.name, e.value]));
  body.append("revision", field("revision").value);
  body.append("structure", field("structure").value);
  body.append("shown", JSON.stringify(marks));
  if (action) body.append("action", action);
  return body;
}

async function post(action) {
  clearTimeout(timer);
  if (request?.action) {
    // an action is never given up; what comes after it waits for its answer
    waiting.push(action);
    return;
  }
  const elements = edited();
  if (!action && !elements.length) return;
  request?.abort.abort();
  const mine = { action, abort: new AbortController() };
  request = mine;
  form.setAttribute("aria-busy", "true");
  const sent = new Map(elements.map((e) => [e.name, e.value]));
  try {
    const answer = await fetch("/desk", {
      method: "POST", body: bodyOf(elements, action), headers: { Accept: "application/json" }, signal: mine.abort.signal,
    });
    if (answer.ok) {
      bringIn(await answer.json(), sent, action);
    } else {
      const page = new DOMParser().parseFromString(await answer.text(), "text/html");
      say(page.getElementById("message")?.textContent ?? "The program refused this; what you typed is still here.");
    }
  } catch (fault) {
    if (fault.name !== "AbortError") say("The program does not answer. What you typed is still here; it is sent with the next change.");
  } finally {
    if (request === mine) {
      request = null;
      form.removeAttribute("aria-busy");
      if (waiting.length) post(waiting.shift());
    }
  }
}

function bringIn(change, sent, action) {
  const place = placeOfFocus();
  const entries = new Set([...form.querySelectorAll("li[id]")].map((e) => e.id));
  for (const [name, fragment] of Object.entries(change.fragments)) {
    const holder = document.getElementById(name);
    const typedSince = edited().filter((e) => sent.get(e.name) !== e.value);
    swap(holder, fragment.html);
    if (name === "data") {
      remember(holder);
      for (const old of typedSince) if (field(old.name)) field(old.name).value = old.value;
    } else {
      marks[name] = fragment.mark;
    }
  }
  for (const [address, value] of sent) {
    if (field(address) && !(address in change.texts)) field(address).dataset.known = value;
  }
  for (const [address, value] of Object.entries(change.texts)) {
    const element = field(address);
    if (!element) continue;
    // the field keeps what was typed since; anything else follows the desk
    if (element.value === element.dataset.known || element.value === sent.get(address)) element.value = value;
    element.dataset.known = value;
  }
  field("revision").value = change.revision;
  field("structure").value = change.structure;
  showFaults(change.faults);
  showChosen();
  if (action.startsWith("open:")) document.getElementById("demos").open = false;
  const begun = /^(add|copy)/.test(action) && [...form.querySelectorAll("li[id]")].find((e) => !entries.has(e.id));
  if (begun) begun.querySelector("input").focus();
  else restoreFocus(place);
}

// New markup in a part of the page; what stood open stays open.
function swap(holder, html) {
  const key = (details) => details.id || details.closest("[id]").id + "/" + details.querySelector("summary").textContent.replace(/\d+/g, "");
  const open = new Set([...holder.querySelectorAll("details[open]")].map(key));
  holder.innerHTML = html;
  for (const details of holder.querySelectorAll("details")) if (open.has(key(details))) details.open = true;
}

// Where the focus is: the element's id or the button's action, and what stands round it, from the inside outwards.
function placeOfFocus() {
  const element = document.activeElement;
  if (!element || element === document.body) return null;
  const around = [];
  for (let e = element.parentElement; e; e = e.parentElement) if (e.id) around.push(e.id);
  return { element, id: element.id, action: element.name === "action" ? element.value : "", from: element.selectionStart, to: element.selectionEnd, around };
}

function restoreFocus(place) {
  if (!place || (place.element.isConnected && !place.element.disabled)) return;
  let element = place.id ? document.getElementById(place.id) : null;
  if (place.action) element = document.querySelector(`button[name="action"][value="${CSS.escape(place.action)}"]:enabled`);
  for (const id of place.around) element ??= document.getElementById(id)?.querySelector("input:not([type=hidden]), button:enabled");
  element?.focus({ preventScroll: Boolean(place.id) });
  if (element && element.id === place.id && typeof place.from === "number") element.setSelectionRange(place.from, place.to);
}

function showFaults(faults) {
  for (const line of form.querySelectorAll(".fault")) line.remove();
  for (const element of form.querySelectorAll("[aria-invalid]")) {
    element.removeAttribute("aria-invalid");
    element.removeAttribute("aria-describedby");
  }
  for (const fault of faults) {
    const element = field(fault.field);
    const entry = element?.closest(".eigenvalue, .head, .field") ?? document.getElementById(fault.field);
    if (!fault.field || !entry) continue;
    const line = document.createElement("span");
    line.className = "fault";
    line.id = "fault-" + fault.field;
    line.textContent = fault.message + (fault.expected ? `. Right would be: ${fault.expected}` : "");
    (entry.querySelector(":scope > .head") ?? entry).append(line);
    element?.setAttribute("aria-invalid", "true");
    element?.setAttribute("aria-describedby", line.id);
    entry.closest("details")?.setAttribute("open", "");
  }
}

// The vertex in the address stands out in the diagram and in the list, also after both were drawn anew.
function showChosen() {
  const id = decodeURIComponent(location.hash.slice(1));
  for (const element of document.querySelectorAll(".chosen")) element.classList.remove("chosen");
  if (!id.startsWith("vertex-")) return;
  document.getElementById(id)?.classList.add("chosen");
  document.querySelector(`#diagram [data-vertex="${CSS.escape(id.slice("vertex-".length))}"]`)?.classList.add("chosen");
}

document.documentElement.classList.add("scripted");
remember(form);
for (const holder of document.querySelectorAll("[data-mark]")) marks[holder.id] = holder.dataset.mark;
showChosen();
addEventListener("hashchange", showChosen);

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
// what was typed in the last moment before the page is left
function sendTheRest() {
  const elements = edited().filter((e) => e.name !== "shorthand");
  if (elements.length) navigator.sendBeacon("/desk", bodyOf(elements, ""));
}
addEventListener("beforeunload", sendTheRest);
addEventListener("pagehide", sendTheRest);

const file = document.getElementById("document-file");
file.closest(".from-file").hidden = false;
file.addEventListener("change", async () => {
  if (file.files.length) document.getElementById("document").value = await file.files[0].text();
});

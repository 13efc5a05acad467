// The form talks to the program behind it and shows what it answers. Nothing is
// computed here, nothing is kept, and nothing is sent anywhere else.
//
// One rule comes before all others: what stands under "The worksheet" was worked
// out from what stands in the form now. The moment a field changes, the old
// worksheet is gone; an answer to older inputs is dropped.

"use strict";

const $ = (id) => document.getElementById(id);
const form = $("case");
const idOf = (path) => "f-" + path.replaceAll("[", "-").replaceAll("]", "").replaceAll(".", "-");

// ---- The program behind the page

class Refused extends Error {
  constructor(answer) {
    super(answer.say);
    this.lines = answer.lines || [];
  }
}

async function send(path, body, { signal, headers = { "Content-Type": "application/json" } } = {}) {
  let response;
  try {
    response = await fetch(path, { method: "POST", body, headers, signal, cache: "no-store", credentials: "omit" });
  } catch (err) {
    if (err.name === "AbortError") throw err;
    throw new Refused({ say: "The program behind this page does not answer. Is it still running? Nothing in the form is lost." });
  }
  if (response.headers.get("Content-Type") === "application/problem+json") throw new Refused(await response.json());
  if (response.ok) return response;
  throw new Refused({ say: "Refused: " + (await response.text()).trim() });
}

// The fields as [path, text] pairs, blank ones too: a blank row is still a row.
const pairs = () => JSON.stringify([...new FormData(form)]);

// ---- What is said: one line at the foot, read out by screen readers

let saying;
function tell(text, wait = 0) {
  clearTimeout(saying);
  saying = setTimeout(() => {
    if ($("say").textContent !== text) $("say").textContent = text;
  }, wait);
}

// ---- Drafting

let turn = 0; // counts the states of the form; an answer to an older one is dropped
let timer, running;
let faults = [];
let unsaved = false;
const left = new Set(); // fields that were left or filled from a file: their faults stand beside them

function changed(wait = 250) {
  turn++;
  unsaved = true;
  blank();
  if (asked !== undefined && asked !== sharedFields()) forgetList();
  countFilled();
  clearTimeout(timer);
  running?.abort();
  timer = setTimeout(draft, wait);
}

// blank takes the old worksheet out of sight and out of the document. Its place
// is kept, so that nothing jumps under the reader.
function blank() {
  for (const part of [$("top"), $("rest")]) {
    if (part.firstChild) part.style.minHeight = part.offsetHeight + "px";
    part.replaceChildren();
  }
  $("stale").hidden = false;
  $("result").setAttribute("aria-busy", "true");
  clearTimeout(saying);
  $("say").textContent = "";
}

async function draft() {
  const mine = turn;
  running = new AbortController();
  try {
    const answer = await (await send("/draft", pairs(), { signal: running.signal })).json();
    if (mine === turn) show(answer);
  } catch (err) {
    if (mine !== turn || err.name === "AbortError") return;
    $("stale").textContent = "No draft: " + err.message;
    tell(err.message);
  }
}

function show(answer) {
  $("top").innerHTML = answer.top; // set by the program's templates, which escape what was typed
  $("rest").innerHTML = answer.rest;
  for (const part of [$("top"), $("rest")]) part.style.minHeight = "";
  $("stale").hidden = true;
  $("stale").textContent = "The inputs have changed. Drafting again …";
  $("result").removeAttribute("aria-busy");
  faults = answer.faults;
  if (answer.state !== "faults") showStops(answer.stops);
  showFaults();
  tell(answer.say, 500);
  // A reason is typed between two parts that have just changed their heights.
  if ($("overrides").contains(document.activeElement)) document.activeElement.scrollIntoView({ block: "nearest" });
}

// showFaults puts each fault beside its field once the field was left.
function showFaults() {
  for (const p of form.querySelectorAll(".fault:not(:empty)")) p.textContent = "";
  for (const el of form.querySelectorAll("[aria-invalid]")) el.removeAttribute("aria-invalid");
  for (const f of faults) {
    const el = f.id && $(f.id);
    if (!el) continue;
    if (!f.missing) openUp(el);
    if (!left.has(f.id)) continue;
    const p = $("e-" + f.id);
    p.textContent += (p.textContent ? " " : "") + f.text;
    if (el.tagName !== "FIELDSET") el.setAttribute("aria-invalid", "true");
  }
}

// openUp unfolds whatever hides an element.
function openUp(el) {
  for (let d = el.closest("details"); d; d = d.parentElement.closest("details")) d.open = true;
}

function countFilled() {
  for (const d of form.querySelectorAll("details")) {
    const n = [...d.querySelectorAll("input, select, textarea")].filter((el) => (el.type === "checkbox" ? el.checked : el.value.trim())).length;
    d.querySelector(".filled").textContent = n ? "(" + n + " filled in)" : "";
  }
}

// ---- Going on past a stop: a reason for each, which stays while it is typed

function reasonFor(slug, text) {
  const name = "overrides." + slug;
  let row = form.elements[name]?.closest(".field");
  if (!row) {
    row = $("t-overrides").content.firstElementChild.cloneNode(true);
    for (const el of [row, ...row.querySelectorAll("*")]) {
      for (const a of [...el.attributes]) el.setAttribute(a.name, a.value.replaceAll("#", a.name === "name" ? slug : slug.replaceAll(".", "-")));
    }
    $("reasons").append(row);
  }
  row.querySelector("label").textContent = "Reason for going on past " + slug + (text ? ": " + text : "");
  $("overrides").hidden = false;
  return row.querySelector("textarea");
}

function showStops(stops) {
  for (const s of stops) reasonFor(s.slug, s.text);
  const raised = new Set(stops.map((s) => "overrides." + s.slug));
  for (const el of $("reasons").querySelectorAll("textarea")) {
    if (!raised.has(el.name) && !el.value.trim() && el !== document.activeElement) el.closest(".field").remove();
  }
  $("overrides").hidden = !$("reasons").childElementCount;
}

// ---- Lists: models, doses in print

const lists = Object.fromEntries([...form.querySelectorAll("[data-list]")].map((box) => [box.dataset.list, box]));
const itemsOf = (box) => [...box.querySelectorAll("[data-item]")];

function addItem(box) {
  const item = box.querySelector("template").content.firstElementChild.cloneNode(true);
  box.querySelector("template").before(item);
  number(box);
  return item;
}

// number gives every row its place in all names and ids.
function number(box) {
  const items = itemsOf(box);
  const place = new RegExp("(" + box.dataset.list + "[\\[-])(?:\\d+|#)", "g");
  items.forEach((item, i) => {
    for (const el of item.querySelectorAll("[id], [name], [for]")) {
      for (const a of ["id", "name", "for", "aria-describedby", "aria-controls"]) {
        if (el.hasAttribute(a)) el.setAttribute(a, el.getAttribute(a).replace(place, "$1" + i));
      }
    }
    item.querySelector("[data-number]").textContent = items.length > 1 ? i + 1 : "";
    item.querySelector("[data-remove]").hidden = items.length <= (box.dataset.least || 0);
  });
}

form.addEventListener("click", (e) => {
  const box = e.target.closest("[data-list]");
  if (e.target.matches("[data-add]")) {
    addItem(box).querySelector("input").focus();
    changed();
  } else if (e.target.matches("[data-remove]")) {
    const item = e.target.closest("[data-item]");
    const next = item.nextElementSibling?.matches("[data-item]") ? item.nextElementSibling : item.previousElementSibling;
    item.remove();
    left.clear(); // ids have moved
    number(box);
    (next?.matches("[data-item]") ? next.querySelector("legend") : box.querySelector("[data-add]")).focus();
    tell("Removed.");
    changed();
  }
});

// ---- The animal, found while it is typed

let searching;
async function search(el, offer) {
  const mine = (searching = Symbol());
  const note = $("n-" + el.id);
  note.textContent = "";
  if (el.value.trim().length < 2) return close(el);
  let answer;
  try {
    answer = await (await send("/animals", JSON.stringify(el.value))).json();
  } catch {
    return; // drafting says what is wrong
  }
  if (mine !== searching && offer) return;
  note.textContent = answer.animal;
  if (!offer || document.activeElement !== el) return close(el);
  const list = $(el.getAttribute("aria-controls"));
  list.replaceChildren(
    ...answer.list.map((c, i) => {
      const li = document.createElement("li");
      li.id = list.id + "-" + i;
      li.setAttribute("role", "option");
      li.setAttribute("aria-selected", "false");
      li.dataset.name = c.name;
      const about = document.createElement("span");
      about.textContent = c.about;
      li.append(c.name, about);
      return li;
    }),
  );
  const only = answer.list.length === 1 && answer.animal;
  list.hidden = !answer.list.length || !!only;
  el.setAttribute("aria-expanded", String(!list.hidden));
  el.removeAttribute("aria-activedescendant");
  if (only) tell(answer.animal);
  else if (answer.list.length) tell((answer.more ? answer.list.length + " of " + (answer.list.length + answer.more) : answer.list.length) + (answer.list.length === 1 ? " animal" : " animals") + " listed; arrow keys choose.");
  else if (!answer.animal) note.textContent = "no animal of this name";
}

function close(el) {
  $(el.getAttribute("aria-controls")).hidden = true;
  el.setAttribute("aria-expanded", "false");
  el.removeAttribute("aria-activedescendant");
}

function pick(el, li) {
  el.value = li.dataset.name;
  close(el);
  search(el, false);
  changed(0);
}

form.addEventListener("keydown", (e) => {
  const el = e.target;
  if (el.getAttribute("role") !== "combobox" || el.getAttribute("aria-expanded") !== "true") return;
  const options = [...$(el.getAttribute("aria-controls")).children];
  const at = options.findIndex((li) => li.id === el.getAttribute("aria-activedescendant"));
  const move = (to) => {
    options.forEach((li, i) => li.setAttribute("aria-selected", String(i === to)));
    el.setAttribute("aria-activedescendant", options[to].id);
    options[to].scrollIntoView({ block: "nearest" });
  };
  if (e.key === "ArrowDown") move((at + 1) % options.length);
  else if (e.key === "ArrowUp") move((Math.max(at, 0) + options.length - 1) % options.length);
  else if (e.key === "Enter" && at >= 0) pick(el, options[at]);
  else if (e.key === "Escape") close(el);
  else return;
  e.preventDefault();
});
form.addEventListener("pointerdown", (e) => {
  if (e.target.closest("[role=option]")) e.preventDefault(); // the field keeps the focus
});
form.addEventListener("click", (e) => {
  const li = e.target.closest("[role=option]");
  if (li) pick(li.closest(".combo").querySelector("input"), li);
});

// ---- Typing

form.addEventListener("submit", (e) => e.preventDefault());
let looking;
form.addEventListener("input", (e) => {
  if (!e.target.name) return;
  changed();
  if (e.target.getAttribute("role") === "combobox") {
    $("n-" + e.target.id).textContent = "";
    clearTimeout(looking);
    looking = setTimeout(search, 150, e.target, true);
  }
});
form.addEventListener("focusout", (e) => {
  if (!e.target.name) return;
  left.add(idOf(e.target.name));
  if (e.target.getAttribute("role") === "combobox") close(e.target);
  showFaults();
});
// A fault in the list leads to its field.
$("top").addEventListener("click", (e) => {
  const a = e.target.closest("a[href^='#f-']");
  if (!a) return;
  e.preventDefault();
  const el = $(a.hash.slice(1));
  openUp(el);
  el.focus();
  el.scrollIntoView({ block: "center" });
});

// ---- Files in

const tooMany = "One file at a time, please.";

async function openFile(file) {
  if (/\.(csv|tsv)$/i.test(file.name)) return openList(file);
  if (unsaved && !confirm("Replace what is filled in?")) return;
  showLines([]);
  tell("Reading " + file.name + " …");
  try {
    const headers = { "Content-Type": "application/octet-stream", "X-File-Name": encodeURIComponent(file.name) };
    fill(await (await send("/open", file, { headers })).json());
  } catch (err) {
    showLines([err.message, ...(err.lines || [])]);
    tell(err.message);
    $("open-notes").focus();
  }
}

// showLines says what came of opening a file, and stays.
function showLines(lines) {
  const list = $("open-notes");
  list.replaceChildren(...lines.map((text) => Object.assign(document.createElement("li"), { textContent: text })));
  list.hidden = !lines.length;
}

// fill puts a case into the form, whatever its words are: one that the form does
// not offer becomes an offer, and the program says what is wrong with it.
function fill(answer) {
  empty();
  for (const [path, text] of answer.pairs) {
    const at = /^(\w+)\[(\d+)\]/.exec(path);
    while (at && itemsOf(lists[at[1]]).length <= Number(at[2])) addItem(lists[at[1]]);
    if (path.startsWith("overrides.")) reasonFor(path.slice("overrides.".length));
    const el = form.elements[path];
    if (el instanceof RadioNodeList) tickWord(path, text);
    else {
      if (el.tagName === "SELECT" && ![...el.options].some((o) => o.value === text)) {
        el.add(new Option(text, text));
        el.lastElementChild.dataset.strange = "";
      }
      el.value = text;
    }
    left.add(idOf(path));
    if (el.closest) openUp(el);
    if (el.role === "combobox" || el.getAttribute?.("role") === "combobox") search(el, false);
  }
  changed(0);
  unsaved = false;
  tell(answer.say);
  showLines([answer.say]);
  $("result").focus();
}

function tickWord(path, word) {
  const choices = $(idOf(path)).querySelector(".choices");
  let box = [...choices.querySelectorAll("input")].find((el) => el.value === word);
  if (!box) {
    const label = choices.firstElementChild.cloneNode(true);
    label.lastChild.textContent = " " + word;
    box = label.firstElementChild;
    box.value = word;
    label.dataset.strange = "";
    choices.append(label);
  }
  box.checked = true;
}

// empty takes everything out, the date excepted, which is that of today again.
function empty() {
  for (const box of Object.values(lists)) {
    itemsOf(box).slice(box.dataset.least || 0).forEach((item) => item.remove());
    number(box);
  }
  $("reasons").replaceChildren();
  $("overrides").hidden = true;
  for (const el of form.querySelectorAll("[data-strange]")) el.remove();
  form.reset();
  left.clear();
  faults = [];
  for (const p of form.querySelectorAll(".found")) p.textContent = "";
  for (const d of form.querySelectorAll("details")) d.open = false;
  showFaults();
}

$("open").addEventListener("change", (e) => {
  if (e.target.files.length) openFile(e.target.files[0]);
  e.target.value = "";
});
$("example").addEventListener("click", async () => {
  if (unsaved && !confirm("Replace what is filled in?")) return;
  try {
    fill(await (await send("/example", "{}")).json());
  } catch (err) {
    tell(err.message);
  }
});
$("clear").addEventListener("click", () => {
  if (unsaved && !confirm("Empty the form?")) return;
  empty();
  showLines([]);
  changed(0);
  unsaved = false;
  form.elements["case"].focus();
});

const carriesFiles = (e) => [...(e.dataTransfer?.types || [])].includes("Files");
document.addEventListener("dragover", (e) => {
  if (!carriesFiles(e)) return;
  e.preventDefault();
  document.body.classList.add("dropping");
});
document.addEventListener("dragleave", (e) => {
  if (!e.relatedTarget) document.body.classList.remove("dropping");
});
document.addEventListener("drop", (e) => {
  if (!carriesFiles(e)) return;
  e.preventDefault();
  document.body.classList.remove("dropping");
  if (e.dataTransfer.files.length === 1) openFile(e.dataTransfer.files[0]);
  else tell(tooMany);
});

// ---- Files out

function saveAs(blob, name) {
  const a = document.createElement("a");
  a.href = URL.createObjectURL(blob);
  a.download = name;
  a.click();
  setTimeout(() => URL.revokeObjectURL(a.href), 60_000);
  tell("Saved as " + name + ".");
}

$("keep").addEventListener("click", async (e) => {
  const path = e.target.dataset.get;
  if (!path) return;
  const mine = turn;
  try {
    const response = await send(path.endsWith("/") ? path + $("paper").value : path, pairs());
    saveAs(await response.blob(), /filename="([^"]+)"/.exec(response.headers.get("Content-Disposition"))[1]);
    if (mine === turn) unsaved = false;
  } catch (err) {
    for (const f of faults) left.add(f.id);
    showFaults();
    tell([err.message, ...err.lines].join(" "));
  }
});
$("print").addEventListener("click", () => window.print());
window.addEventListener("beforeunload", (e) => {
  if (unsaved) e.preventDefault();
});

// ---- A list of animals

let list, result, working; // the file as it was opened, what came of it, the work on it
let asked; // what all its rows shared when it was worked out

// sharedFields are the fields of the form that hold for every row.
function sharedFields() {
  return JSON.stringify([...new FormData(form)].filter(([name]) => /^(date|prepared_by|method\..*)$/.test(name)));
}

// forgetList takes a result away that was worked out with other fields.
function forgetList() {
  asked = undefined;
  working?.abort();
  $("list-keep").hidden = true;
  $("list-result").textContent = "The date, who prepares it or the method has changed: open the list again.";
}

async function openList(file) {
  list = file;
  $("list-keep").hidden = true;
  $("list-result").replaceChildren();
  const done = await batch("table");
  if (!done) return;
  $("list-result").innerHTML = done.html; // set by the program's templates
  $("list-keep").hidden = false;
  $("list-result").focus();
  result = done;
}

// batch has the program work the list out. The answer is lines that tell how far
// it is; behind the last one stands the file.
async function batch(what) {
  working?.abort();
  const mine = (working = new AbortController());
  asked = sharedFields();
  $("list-work").hidden = false;
  $("list-bar").value = 0;
  tell("Working on " + list.name + " …");
  try {
    const headers = { "Content-Type": "application/octet-stream", "X-File-Name": encodeURIComponent(list.name), "X-Shared": encodeURIComponent(asked) };
    const response = await send("/batch/" + what + "?paper=" + $("paper").value, list, { headers, signal: mine.signal });
    const reader = response.body.getReader();
    let rest = new Uint8Array();
    for (;;) {
      const { value, done } = await reader.read();
      if (done) throw new Refused({ say: "The work on " + list.name + " broke off." });
      rest = joined(rest, value);
      for (let end; (end = rest.indexOf(10)) >= 0; ) {
        const line = JSON.parse(new TextDecoder().decode(rest.subarray(0, end)));
        rest = rest.subarray(end + 1);
        $("list-bar").value = line.share;
        if (line.done) return await finish(line, reader, rest);
        tell(line.say);
      }
    }
  } catch (err) {
    if (err.name === "AbortError") tell("Stopped.");
    else if (err instanceof Refused) tell([err.message, ...err.lines].join(" "));
    else tell("The work on " + list.name + " broke off.");
  } finally {
    if (mine === working) $("list-work").hidden = true;
  }
}

async function finish(line, reader, first) {
  if (line.failed) throw new Refused(line);
  const parts = [first];
  for (;;) {
    const { value, done } = await reader.read();
    if (done) break;
    parts.push(value);
  }
  tell(line.say);
  return { ...line, file: new Blob(parts, { type: line.type }) };
}

function joined(a, b) {
  const out = new Uint8Array(a.length + b.length);
  out.set(a);
  out.set(b, a.length);
  return out;
}

$("list").addEventListener("change", (e) => {
  if (e.target.files.length) openList(e.target.files[0]);
  e.target.value = "";
});
$("list-stop").addEventListener("click", () => {
  working.abort();
  $("list").focus(); // the button goes away
});
$("list-table").addEventListener("click", () => saveAs(result.file, result.name));
$("list-sheets").addEventListener("click", async () => {
  const done = await batch("worksheets");
  if (done) saveAs(done.file, done.name);
});

// ---- Begin

for (const box of Object.values(lists)) number(box);
const now = new Date();
form.elements["date"].defaultValue = [now.getFullYear(), now.getMonth() + 1, now.getDate()].map((n) => String(n).padStart(2, "0")).join("-");
changed(0);
unsaved = false;

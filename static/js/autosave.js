// Every cell is sent when it is left; what cannot be sent stays on this device and is sent again.

import { ask, asks, cellOf, say, settle } from "./saying.js";
import { cells, changed, forget, keep, kept, unsent } from "./unsent.js";

const RETRY = 10_000;
const OFFLINE = "No connection. The value is kept on this device and sent when it is back.";
const SIGNED_OUT = "You are signed out. The value is kept on this device: sign in in another tab, then come back.";
const BROKEN = "The server could not save this. The value is kept on this device and sent again.";

const underway = new Map();

function token() {
  const cookie = document.cookie.match(/(?:^|; )csrftoken=([^;]+)/);
  return cookie ? cookie[1] : document.body.dataset.token;
}

function bodyOf(cell, more) {
  const body = new URLSearchParams({ [cell.name]: cell.value, ...more });
  if (cell.dataset.stamp) body.set("stamp", cell.dataset.stamp);
  return body;
}

async function post(cell, more) {
  const headers = { "X-CSRFToken": token(), "X-Requested-With": "fetch", Accept: "application/json, text/html" };
  return fetch(cell.dataset.url, {
    method: "POST", body: bodyOf(cell, more), headers, redirect: "manual", keepalive: true,
  });
}

function accept(cell, sent, answer) {
  cell.dataset.kept = sent;
  if (answer.stamp) cell.dataset.stamp = answer.stamp;
  if (cell.value === sent) {
    if (answer.value !== undefined && answer.value !== null) cell.value = cell.dataset.kept = answer.value;
    forget(cell);
  }
  const words = answer.saved ? `saved ${answer.saved}` : "saved";
  if (answer.remark) say(cell, `${answer.remark} It is ${words}.`, "is-remark");
  else say(cell, words);
  cell.dispatchEvent(new CustomEvent("labrecords:saved", { bubbles: true }));
}

async function sentencesOf(response) {
  const text = await response.text();
  if (response.headers.get("content-type")?.includes("json")) return JSON.parse(text).reasons ?? [];
  return [new DOMParser().parseFromString(text, "text/html").body.textContent.trim()];
}

async function receive(cell, sent, response) {
  if (response.type === "opaqueredirect" || response.status === 401 || response.status === 403) {
    say(cell, SIGNED_OUT, "is-person");
  } else if (response.status === 428) {
    ask(cell, await response.text());
  } else if (response.status === 400 || response.status === 409) {
    say(cell, (await sentencesOf(response)).join(" "), "is-out");
  } else if (!response.ok) {
    say(cell, BROKEN, "is-person");
  } else {
    const json = response.headers.get("content-type")?.includes("json");
    const text = await response.text();
    accept(cell, sent, json ? JSON.parse(text) : {});
    if (!json) swap(cell, text);
  }
}

// An HTML answer takes the place of what the cell names in data-swap, and the focus stays where it was.
function swap(cell, html) {
  const place = cell.dataset.swap ? document.querySelector(cell.dataset.swap) : null;
  if (!place || !html.trim()) return;
  const focus = document.activeElement?.id;
  const fragment = document.createRange().createContextualFragment(html);
  const fresh = fragment.firstElementChild;
  place.replaceWith(fragment);
  if (fresh) window.htmx?.process(fresh);
  start();
  if (focus) document.getElementById(focus)?.focus();
}

async function send(cell, more = {}) {
  const sent = cell.value;
  if (!asks(cell)) say(cell, "saving");
  try {
    await receive(cell, sent, await post(cell, more));
  } catch {
    say(cell, OFFLINE, "is-person");
  }
}

// One request at a time for a cell: what was typed meanwhile goes after it.
function queue(cell, more) {
  const before = underway.get(cell) ?? Promise.resolve();
  const mine = before.then(() => (changed(cell) ? send(cell, more) : undefined));
  underway.set(cell, mine);
  return mine.finally(() => underway.get(cell) === mine && underway.delete(cell));
}

function sendReason(box) {
  const fields = [...box.querySelectorAll("[name]")];
  const missing = fields.find((field) => !field.reportValidity());
  if (missing) return;
  queue(cellOf(box), Object.fromEntries(fields.map((field) => [field.name, field.value])));
}

function putBack(box) {
  const cell = cellOf(box);
  cell.value = cell.dataset.kept;
  forget(cell);
  say(cell, "");
  cell.focus();
}

function leave(cell) {
  if (changed(cell)) {
    queue(cell, {});
  } else {
    forget(cell);
      say(cell, "");
  }
}

function start() {
  for (const cell of cells()) {
    if (cell.dataset.kept !== undefined) continue;
    cell.dataset.kept = cell.defaultValue ?? cell.value;
    settle(cell);
    const entry = kept(cell);
    if (!entry || entry.value === cell.value) continue;
    cell.value = entry.value;
    queue(cell, {});
  }
}

function again() {
  if (!navigator.onLine) return;
  for (const cell of unsent()) {
    const waits = cell.dataset.says === "is-person" && !asks(cell);
    if (waits && cell !== document.activeElement) queue(cell, {});
  }
}

// A button that leaves the sheet waits for the cells that are on their way.
async function hold(event) {
  if (underway.size === 0 || event.target.closest("[data-reason]")) return;
  event.preventDefault();
  event.stopImmediatePropagation();
  const { target, submitter } = event;
  await Promise.allSettled([...underway.values()]);
  if (event.type === "submit") target.requestSubmit(submitter ?? undefined);
  else target.click();
}

document.addEventListener("input", ({ target }) => target.matches("[data-autosave]") && keep(target));
document.addEventListener("focusout", ({ target }) => target.matches("[data-autosave]") && leave(target));
document.addEventListener("change", ({ target }) => target.matches("select[data-autosave]") && leave(target));
document.addEventListener("submit", hold, true);
document.addEventListener("click", (event) => event.target.closest("[data-new-titration]") && hold(event), true);
document.addEventListener("click", ({ target }) => {
  const box = target.closest("[data-reason]");
  if (box && target.closest("[data-reason-send]")) sendReason(box);
  if (box && target.closest("[data-reason-back]")) putBack(box);
});
document.addEventListener("keydown", (event) => {
  const box = event.target.closest("[data-reason]");
  if (!box || event.key !== "Enter" || event.target.matches("button")) return;
  event.preventDefault();
  sendReason(box);
});
document.addEventListener("htmx:load", start);
window.addEventListener("online", again);
document.addEventListener("visibilitychange", again);
setInterval(again, RETRY);
start();

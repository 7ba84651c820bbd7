// What a cell says: short words under it, sentences and questions in a row of their own below it.

function room(cell) {
  const row = cell.closest("tr");
  if (!row) return cell.parentElement;
  const known = document.getElementById(`${cell.id}-room`);
  if (known) return known;
  const line = document.createElement("tr");
  const place = document.createElement("td");
  line.className = "said";
  place.id = `${cell.id}-room`;
  place.colSpan = row.cells.length;
  place.dataset.roomOf = cell.id;
  line.append(place);
  row.after(line);
  return place;
}

function leaveRoom(cell) {
  document.getElementById(`${cell.id}-room`)?.parentElement.remove();
}

function sentence(cell, words, mark) {
  const line = document.createElement("p");
  line.className = `kept ${mark}`;
  line.id = `${cell.id}-said`;
  line.role = "alert";
  line.textContent = words;
  room(cell).replaceChildren(line);
  cell.setAttribute("aria-describedby", line.id);
}

// mark: "" for what needs nobody, "is-person" for what waits, "is-remark" for what was kept and
// deserves a second look, "is-out" for what was refused
export function say(cell, words, mark = "") {
  const under = document.getElementById(`${cell.id}-kept`);
  cell.toggleAttribute("aria-invalid", false);
  if (mark === "is-out") cell.setAttribute("aria-invalid", "true");
  cell.dataset.says = mark;
  if (under) under.textContent = mark ? "" : words;
  if (under) under.className = "kept";
  if (mark) sentence(cell, words, mark);
  else leaveRoom(cell);
}

export function ask(cell, html) {
  say(cell, "Not recorded yet: a reason is needed.", "is-person");
  const place = room(cell);
  place.append(document.createRange().createContextualFragment(html));
  place.querySelector("[data-reason] :is(select, input, textarea)")?.focus();
}

export const asks = (cell) => document.querySelector(`#${CSS.escape(cell.id)}-room [data-reason]`) !== null;

export const cellOf = (box) =>
  document.getElementById(box.closest("[data-room-of]")?.dataset.roomOf) ??
  box.parentElement.querySelector("[data-autosave]");

// A sentence that came with the page moves to where the later ones appear.
export function settle(cell) {
  const under = document.getElementById(`${cell.id}-kept`);
  if (under?.classList.contains("is-out")) say(cell, under.textContent, "is-out");
}

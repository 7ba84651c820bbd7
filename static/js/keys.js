// "/" goes to the find field; Enter to the next cell, Shift Enter to a new titration, x to an exclusion.

const editable = (element) => element.closest("input, textarea, select, [contenteditable]");

function cellsOf(cell) {
  const sheet = cell.closest("[data-cells]");
  const cells = sheet ? [...sheet.querySelectorAll("[data-cell]")] : [];
  return cells.filter((one) => !one.readOnly && !one.disabled && one.offsetParent !== null);
}

function newTitration() {
  document.querySelector("[data-new-titration]")?.click();
}

function nextCell(cell) {
  const cells = cellsOf(cell);
  const next = cells[cells.indexOf(cell) + 1] ?? document.querySelector("[data-new-titration]");
  if (!next) {
    cell.blur();
    return;
  }
  next.focus();
  next.select?.();
}

function onFind(event) {
  if (event.key !== "/" || event.ctrlKey || event.metaKey || event.altKey || editable(event.target)) return;
  const find = document.querySelector("[data-find]");
  if (!find) return;
  event.preventDefault();
  find.focus();
  find.select();
}

function onCell(event) {
  const cell = event.target.closest("[data-cell]");
  if (!cell || event.isComposing || event.ctrlKey || event.metaKey || event.altKey) return;
  if (event.key === "Enter") {
    event.preventDefault();
    if (event.shiftKey) {
      cell.blur();
      newTitration();
    } else {
      nextCell(cell);
    }
  } else if (event.key === "x" && cell.inputMode === "decimal") {
    event.preventDefault();
    cell.closest("tr")?.querySelector("[data-exclude]")?.click();
  }
}

function afterNewTitration(event) {
  const pressed = event.detail.requestConfig?.elt;
  if (!pressed?.closest("[data-new-titration], form:has([data-new-titration])")) return;
  const empty = [...document.querySelectorAll("[data-cells] [data-cell]")].filter((cell) => !cell.value);
  empty.at(0)?.focus();
}

document.addEventListener("keydown", onFind);
document.addEventListener("keydown", onCell);
document.addEventListener("htmx:afterSettle", afterNewTitration);

// Values typed and not yet acknowledged, kept on this device under the person who typed them.

const PREFIX = `unsent:${document.body.dataset.person}:`;

const keyOf = (cell) => `${PREFIX}${cell.dataset.url} ${cell.name} ${cell.id}`;

export function keep(cell) {
  const entry = { value: cell.value, stamp: cell.dataset.stamp ?? "", at: Date.now() };
  try {
    localStorage.setItem(keyOf(cell), JSON.stringify(entry));
  } catch {
    // storage is full or closed to this page: the value is still in its field
  }
  tell();
}

export function forget(cell) {
  localStorage.removeItem(keyOf(cell));
  tell();
}

export function kept(cell) {
  try {
    return JSON.parse(localStorage.getItem(keyOf(cell)) ?? "null");
  } catch {
    return null;
  }
}

export function changed(cell) {
  return cell.value !== (cell.dataset.kept ?? cell.defaultValue);
}

export function cells(root = document) {
  return [...root.querySelectorAll("[data-autosave]")].filter((cell) => !cell.readOnly && !cell.disabled);
}

export const unsent = () => cells().filter(changed);

function tell() {
  document.dispatchEvent(new CustomEvent("labrecords:unsent"));
}

// Says how many values are not sent yet, and warns before the page is left with them.

import { unsent } from "./unsent.js";

function note() {
  const place = document.querySelector("[data-unsent]");
  if (!place) return;
  const count = unsent().filter((cell) => cell !== document.activeElement).length;
  place.hidden = count === 0;
  place.textContent = count === 1
    ? "1 value is not recorded yet. It is kept on this device."
    : `${count} values are not recorded yet. They are kept on this device.`;
}

function warn(event) {
  if (unsent().length > 0) event.preventDefault();
}

document.addEventListener("labrecords:unsent", note);
document.addEventListener("labrecords:saved", note);
document.addEventListener("focusout", () => setTimeout(note));
window.addEventListener("beforeunload", warn);
note();

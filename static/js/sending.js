// A form that is on its way is not sent a second time.

function onSubmit(event) {
  const form = event.target;
  if (event.defaultPrevented || form.method !== "post" || form.closest("[hx-post]")) return;
  if (form.getAttribute("aria-busy") === "true") {
    event.preventDefault();
    return;
  }
  form.setAttribute("aria-busy", "true");
}

function release() {
  for (const form of document.querySelectorAll("form[aria-busy]")) form.removeAttribute("aria-busy");
}

document.addEventListener("submit", onSubmit);
window.addEventListener("pageshow", release);

// A file dropped anywhere on the page goes into its file field, and is sent where the place says so.

const place = () => document.querySelector("[data-drop]");
const field = () => place()?.querySelector("input[type=file]");

function carriesFile(event) {
  return [...(event.dataTransfer?.types ?? [])].includes("Files") && field();
}

function over(event) {
  if (!carriesFile(event)) return;
  event.preventDefault();
  place().classList.add("over");
}

function out(event) {
  if (event.relatedTarget === null) place()?.classList.remove("over");
}

function drop(event) {
  if (!carriesFile(event)) return;
  event.preventDefault();
  place().classList.remove("over");
  field().files = event.dataTransfer.files;
  field().dispatchEvent(new Event("change", { bubbles: true }));
}

function chosen(event) {
  if (event.target !== field() || !place().hasAttribute("data-drop-send")) return;
  event.target.form?.requestSubmit();
}

document.addEventListener("dragover", over);
document.addEventListener("dragleave", out);
document.addEventListener("drop", drop);
document.addEventListener("change", chosen);

// Draws each figure with the colours of the page, again when the page turns dark, and to the width it has.

const COLOUR = /var\((--[\w-]+)\)/g;
const CONFIG = {
  responsive: true,
  displaylogo: false,
  modeBarButtonsToRemove: ["select2d", "lasso2d", "autoScale2d"],
};

const styles = getComputedStyle(document.documentElement);

function coloured(value) {
  if (typeof value === "string") return value.replace(COLOUR, (_, name) => styles.getPropertyValue(name).trim());
  if (Array.isArray(value)) return value.map(coloured);
  if (value && typeof value === "object") {
    return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, coloured(inner)]));
  }
  return value;
}

async function figureOf(place) {
  if (place.dataset.src) return (await fetch(place.dataset.src, { headers: { Accept: "application/json" } })).json();
  // while a part of the page is exchanged its data may be on the way: it is drawn when they are there
  const data = place.parentElement?.querySelector("script[type='application/json']");
  return data ? JSON.parse(data.textContent) : null;
}

function narrowed(layout, place) {
  if (place.clientWidth >= 480) return layout;
  const margin = { ...layout.margin, l: Math.min(layout.margin?.l ?? 56, 48), r: 12 };
  return { ...layout, margin };
}

async function draw(place) {
  const told = await figureOf(place);
  if (!told) return;
  const figure = coloured(told);
  const face = getComputedStyle(place).fontFamily;
  const layout = { ...figure.layout, autosize: true, font: { ...figure.layout.font, family: face } };
  await window.Plotly.react(place, figure.data, narrowed(layout, place), CONFIG);
  if (place.dataset.drawn === undefined) place.on("plotly_click", open);
  place.dataset.drawn = "";
}

// A point that stands for a record opens it.
function open(event) {
  const address = event.points[0]?.customdata;
  if (typeof address === "string" && address.startsWith("/") && !address.startsWith("//")) location.assign(address);
}

function drawAll(root, again = false) {
  for (const place of root.querySelectorAll("[data-plot]")) {
    if (again || place.dataset.drawn === undefined) draw(place);
  }
}

matchMedia("(prefers-color-scheme: dark)").addEventListener("change", () => drawAll(document, true));
document.addEventListener("htmx:load", (event) => drawAll(event.target));
drawAll(document);

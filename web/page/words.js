// Numbers and small parts of the page that several instruments need.

// number writes x with three significant digits; a unit follows after a narrow space.
export function number(x, unit = "") {
  if (x === null || x === undefined || Number.isNaN(x)) return "unknown";
  const a = Math.abs(x);
  let text = a !== 0 && (a < 1e-3 || a >= 1e5) ? x.toExponential(2) : String(Number(x.toPrecision(3)));
  text = text.replace(/e([+-])0?/, (_, s) => "e" + (s === "-" ? "-" : "")).replaceAll("-", "\u2212");
  return unit && unit !== "1" ? `${text}\u202f${unit}` : text;
}

// make returns a new element with attributes and children; text children are set as text, never parsed.
export function make(name, attributes = {}, ...children) {
  const el = document.createElement(name);
  for (const [k, v] of Object.entries(attributes)) {
    if (k.startsWith("on")) el.addEventListener(k.slice(2), v);
    else if (v === true) el.setAttribute(k, "");
    else if (v !== false && v !== undefined && v !== null) el.setAttribute(k, v);
  }
  el.append(...children.filter((c) => c !== null && c !== undefined));
  return el;
}

// draw returns a new SVG element.
export function draw(name, attributes = {}, ...children) {
  const el = document.createElementNS("http://www.w3.org/2000/svg", name);
  for (const [k, v] of Object.entries(attributes)) el.setAttribute(k, v);
  el.append(...children);
  return el;
}

// per returns the unit of a gradient, a / b.
export const per = (a, b) => (a && b ? `${a === "1" ? "1" : a}/${b}` : "");

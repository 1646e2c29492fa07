/**
 * The page's only script, and the page is whole without it: a covariate pointed at or focused is lit everywhere, held by
 * a click or Enter; tables are copied as CSV; findings are filtered by kind; a slider walks the path of the screen.
 */
export const SCRIPT = `
"use strict";
(() => {
const all = (selector, root = document) => Array.from(root.querySelectorAll(selector));
const make = (tag, text, more = {}) => Object.assign(document.createElement(tag), { textContent: text }, more);

let held = null;
const light = (index) => {
  document.body.classList.toggle("lit", index !== null);
  for (const one of all(".on")) one.classList.remove("on");
  if (index !== null) for (const one of all('[data-covariate="' + index + '"]')) one.classList.add("on");
};
const of = (event) => event.target.closest ? event.target.closest("[data-covariate]") : null;
const pin = make("div", "", { className: "pin", hidden: true });
const pinned = make("span", "");
const release = make("button", "Release", { type: "button" });
pin.setAttribute("role", "status");
pin.append(pinned, release);
document.body.append(pin);
const hold = (index, name) => {
  held = index;
  pin.hidden = index === null;
  pinned.textContent = index === null ? "" : "Lit everywhere: " + name;
  for (const one of all(".cov[role=button]")) one.setAttribute("aria-pressed", String(one.dataset.covariate === index));
  light(index);
};
release.addEventListener("click", () => hold(null));
for (const one of all(".cov[data-covariate]")) {
  one.tabIndex = 0;
  one.setAttribute("role", "button");
  one.setAttribute("aria-pressed", "false");
  const toggle = () => hold(held === one.dataset.covariate ? null : one.dataset.covariate, one.textContent);
  one.addEventListener("click", toggle);
  one.addEventListener("keydown", (event) => {
    if (event.key === "Enter" || event.key === " ") { event.preventDefault(); toggle(); }
  });
}
document.addEventListener("pointerover", (event) => {
  const found = of(event);
  light(found ? found.dataset.covariate : held);
});
document.addEventListener("focusin", (event) => {
  const found = of(event);
  light(found ? found.dataset.covariate : held);
});
document.addEventListener("keydown", (event) => { if (event.key === "Escape") hold(null); });

const field = (text) => /[",\\n\\r]/.test(text) ? '"' + text.replace(/"/g, '""') + '"' : text;
const csv = (table) => all("tr", table).map((row) => all("th,td", row).map((cell) =>
  field((cell.dataset.v !== undefined ? cell.dataset.v : cell.textContent.replace(/\\u2212/g, "-")).trim())).join(",")).join("\\r\\n") + "\\r\\n";
for (const table of all("main table")) {
  const button = make("button", "Copy as CSV", { type: "button", className: "copy" });
  button.addEventListener("click", async () => {
    const text = csv(table);
    try { await navigator.clipboard.writeText(text); }
    catch {
      const area = make("textarea", text);
      document.body.append(area);
      area.select();
      document.execCommand("copy");
      area.remove();
    }
    button.textContent = "Copied";
    setTimeout(() => { button.textContent = "Copy as CSV"; }, 1600);
  });
  table.closest(".scroll").after(button);
}

const groups = all(".findings > details");
if (groups.length > 1) {
  const select = make("select", "");
  select.append(new Option("all kinds", ""));
  for (const one of groups) select.append(new Option(one.querySelector("summary").firstChild.textContent, one.dataset.kind));
  select.addEventListener("change", () => {
    for (const one of groups) {
      one.hidden = select.value !== "" && one.dataset.kind !== select.value;
      if (select.value !== "") one.open = true;
    }
  });
  const tools = make("div", "", { className: "tools" });
  const name = make("label", "Show ");
  name.append(select);
  tools.append(name);
  groups[0].parentElement.before(tools);
}

for (const walk of all(".walk")) {
  const data = JSON.parse(walk.querySelector("script").textContent);
  const [range, out, svg] = ["input", "output", "svg"].map((one) => walk.querySelector(one));
  const put = (name, more) => {
    const node = document.createElementNS(svg.namespaceURI, name);
    for (const key in more) node.setAttribute(key, more[key]);
    svg.append(node);
    return node;
  };
  const x = (at) => 40 + 650 * at;
  const y = (rate) => 140 - 130 * rate;
  for (const rate of [0, 0.5, 1]) {
    put("path", { d: "M40," + y(rate) + "H690", stroke: "var(--rule)" });
    put("text", { x: 32, y: y(rate) + 4, "text-anchor": "end", fill: "var(--muted)", "font-size": 12 }).textContent = String(rate);
  }
  data.own.forEach((rate, t) => put("circle", { cx: x(data.at[t]), cy: y(rate), r: 3, fill: "var(--ink)" }));
  const line = put("path", { fill: "none", stroke: "var(--mark)", "stroke-width": 2.2 });
  const show = () => {
    const i = Number(range.value);
    const names = data.active[i].map((k) => data.names[k]);
    out.textContent = "λ = " + data.lambdas[i] + (i === Number(walk.dataset.start) ? " (chosen): " : ": ") + (names.length ? names.join(", ") : "no covariate stands");
    range.setAttribute("aria-valuetext", out.textContent);
    line.setAttribute("d", "M" + data.survival[i].map((rate, t) => x(data.at[t]) + "," + y(rate)).join("L"));
  };
  range.addEventListener("input", show);
  walk.hidden = false;
  show();
}

const tame = () => {
  for (const box of all(".scroll")) box.tabIndex = box.scrollWidth > box.clientWidth + 1 ? 0 : -1;
};
tame();
addEventListener("resize", tame);
document.addEventListener("toggle", tame, true);

if ("IntersectionObserver" in window) {
  const links = new Map(all("nav a").map((one) => [one.hash.slice(1), one]));
  const watch = new IntersectionObserver((seen) => {
    for (const one of seen) if (one.isIntersecting) {
      for (const link of links.values()) { link.classList.remove("here"); link.removeAttribute("aria-current"); }
      const link = links.get(one.target.id);
      if (link) { link.classList.add("here"); link.setAttribute("aria-current", "true"); }
    }
  }, { rootMargin: "-10% 0px -75% 0px" });
  for (const one of all("main section")) watch.observe(one);
}

addEventListener("beforeprint", () => { for (const one of all(".findings details")) one.open = true; });
})();
`.trim();

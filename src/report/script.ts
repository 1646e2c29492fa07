/**
 * The page's only script, and the page is whole without it: a covariate pointed at or focused is lit everywhere, held by
 * a click or Enter; switches show one way to look at a time; tables are copied as CSV; findings are filtered by kind and
 * by severity; a slider walks the path of the screen.
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
  if (index !== null) for (const one of all('[data-covariate="' + index + '"],[data-covariates~="' + index + '"]')) one.classList.add("on");
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
  field((cell.dataset.v !== undefined ? cell.dataset.v : cell.textContent.replace(/\\u2212/g, "-").replace(/\\u00a0/g, " ")).trim())).join(",")).join("\\r\\n") + "\\r\\n";
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

const switches = all(".switch").map((root, i) => {
  const field = make("fieldset", "", { className: "tools choice" });
  field.append(make("legend", root.dataset.legend));
  const options = all(":scope > .option", root);
  for (const option of options) {
    const radio = make("input", "", { type: "radio", name: "switch-" + i, value: option.dataset.option });
    radio.addEventListener("change", () => turn(root.dataset.switch, radio.value));
    const label = make("label", "");
    label.append(radio, option.dataset.text);
    field.append(label);
  }
  root.prepend(field);
  return { name: root.dataset.switch, options, field };
});
const turn = (name, key) => {
  for (const one of switches) if (one.name === name) {
    for (const option of one.options) option.classList.toggle("off", option.dataset.option !== key);
    for (const radio of all("input", one.field)) radio.checked = radio.value === key;
  }
};
for (const one of switches) turn(one.name, one.options[0].dataset.option);

const groups = all(".findings > details");
if (groups.length > 1) {
  const select = make("select", "");
  select.append(new Option("all kinds", ""));
  const grave = make("select", "");
  for (const [text, value] of [["all", ""], ["that stop the run", "stop"], ["warnings", "warn"], ["accepted", "accept"]])
    if (value === "" || document.querySelector(".severity." + value)) grave.append(new Option(text, value));
  const shown = make("output", "");
  for (const one of groups) select.append(new Option(one.querySelector("summary").firstChild.textContent, one.dataset.kind));
  const filter = () => {
    let count = 0;
    for (const one of groups) {
      let left = 0;
      for (const item of all("li", one)) {
        item.hidden = grave.value !== "" && !item.querySelector(".severity." + grave.value);
        if (!item.hidden) left++;
      }
      one.hidden = left === 0 || (select.value !== "" && one.dataset.kind !== select.value);
      if (!one.hidden) count += left;
      if (select.value !== "") one.open = true;
    }
    shown.textContent = count + " shown";
  };
  select.addEventListener("change", filter);
  grave.addEventListener("change", filter);
  const tools = make("div", "", { className: "tools" });
  const name = make("label", "Show ");
  name.append(select);
  const how = make("label", "Severity ");
  how.append(grave);
  tools.append(name, how, shown);
  groups[0].parentElement.before(tools);
}

for (const walk of all(".walk")) {
  const data = JSON.parse(walk.querySelector("script").textContent);
  const [range, out] = ["input", "output"].map((one) => walk.querySelector(one));
  const last = data.lambdas.length - 1;
  const n = data.at.length;
  const put = (svg, name, more) => {
    const node = document.createElementNS(svg.namespaceURI, name);
    for (const key in more) node.setAttribute(key, more[key]);
    svg.append(node);
    return node;
  };
  const x = (at) => 60 + 630 * at;
  const y = (rate) => 140 - 130 * rate;
  const lines = all("svg[role=img]", walk).map((svg, g) => {
    for (const rate of [0, 0.5, 1]) {
      put(svg, "path", { d: "M60," + y(rate) + "H690", stroke: "var(--rule)" });
      put(svg, "text", { x: 52, y: y(rate) + 4, "text-anchor": "end", fill: "var(--muted)", "font-size": 12 }).textContent = String(rate);
    }
    put(svg, "text", { transform: "translate(14,75) rotate(-90)", "text-anchor": "middle", fill: "var(--muted)", "font-size": 12 }).textContent = "apparent annual survival";
    for (const [at, text] of data.ticks) put(svg, "text", { x: x(at), y: 160, "text-anchor": "middle", fill: "var(--muted)", "font-size": 12 }).textContent = text;
    for (let t = 0; t < n; t++) put(svg, "circle", { cx: x(data.at[t]), cy: y(data.own[g * n + t]), r: 3, fill: "var(--ink)" });
    const line = put(svg, "path", { fill: "none", stroke: "var(--mark)", "stroke-width": 2.2 });
    return (rates) => {
      const mine = rates.slice(g * n, g * n + n);
      line.setAttribute("d", "M" + mine.map((rate, t) => x(data.at[t]) + "," + y(rate)).join("L"));
      svg.setAttribute("aria-label", "Apparent annual survival" + (data.strata.length > 1 ? ", " + data.strata[g] : "") + ", at this penalty from " + Math.min(...mine) + " to " + Math.max(...mine));
    };
  });
  const share = (i) => Math.log(data.lambdas[0] / data.lambdas[i]) / Math.log(data.lambdas[0] / data.lambdas[last]);
  const markers = all("[data-lambda]").map((one) => {
    const twin = one.cloneNode();
    twin.removeAttribute("data-lambda");
    twin.setAttribute("stroke-dasharray", "3 3");
    one.after(twin);
    const [, top] = /translate\\([^,]+,([^)]+)\\)/.exec(one.getAttribute("transform")) || ["", "0"];
    return (i) => twin.setAttribute("transform", "translate(" + data.width * share(i) + "," + top + ")");
  });
  const standing = all(".standing li", walk);
  const show = () => {
    const i = Number(range.value);
    const names = data.active[i].map((k) => data.names[k]);
    out.textContent = "λ = " + data.lambdas[i] + (i === Number(walk.dataset.start) ? " (chosen): " : ": ") + (names.length ? names.join(", ") : "no covariate stands");
    range.setAttribute("aria-valuetext", out.textContent);
    for (const one of standing) one.classList.toggle("stands", data.active[i].includes(Number(one.dataset.k)));
    for (const one of lines) one(data.survival[i]);
    for (const one of markers) one(i);
  };
  range.addEventListener("input", show);
  walk.hidden = false;
  show();
}

const tame = () => {
  for (const box of all(".scroll")) {
    const wide = box.scrollWidth > box.clientWidth + 1;
    box.tabIndex = wide ? 0 : -1;
    box.classList.toggle("wide", wide);
  }
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

// What a reader can do with a sheet on a screen. It asks nothing of any other place, and the page is whole without it.
"use strict";
(() => {
  const every = (selector, from = document) => [...from.querySelectorAll(selector)];
  const make = (name, given = {}) => Object.assign(document.createElement(name), given);

  // Steps: opened all together, and for the printer.
  const folds = every("details");
  const foldAll = document.querySelector(".fold");
  const setAll = (open) => {
    for (const fold of folds) fold.open = open;
    foldAll.setAttribute("aria-pressed", String(open));
    foldAll.textContent = open ? "Fold all steps" : "Open all steps";
  };
  foldAll.hidden = !folds.length;
  foldAll.addEventListener("click", () => setAll(foldAll.getAttribute("aria-pressed") !== "true"));
  let before = null;
  addEventListener("beforeprint", () => {
    before = folds.map((fold) => fold.open);
    for (const fold of folds) fold.open = true;
  });
  addEventListener("afterprint", () => folds.forEach((fold, place) => (fold.open = before?.[place] ?? fold.open)));
  const openTo = (element) => {
    for (let at = element?.closest("details"); at; at = at.parentElement.closest("details")) at.open = true;
  };
  const follow = () => {
    const target = location.hash && document.getElementById(location.hash.slice(1));
    if (target) {
      openTo(target);
      target.scrollIntoView();
    }
  };
  addEventListener("hashchange", follow);
  follow();

  // Symbols: their names in formulas and in words.
  const greek = {
    alpha: "α", beta: "β", gamma: "γ", delta: "δ", epsilon: "ε", zeta: "ζ", eta: "η", theta: "θ", kappa: "κ",
    lambda: "λ", mu: "μ", nu: "ν", xi: "ξ", pi: "π", rho: "ρ", sigma: "σ", tau: "τ", phi: "φ", chi: "χ", psi: "ψ",
    omega: "ω", Gamma: "Γ", Delta: "Δ", Theta: "Θ", Lambda: "Λ", Xi: "Ξ", Pi: "Π", Sigma: "Σ", Phi: "Φ", Psi: "Ψ",
    Omega: "Ω",
  };
  const keyOf = (name) =>
    name.normalize("NFKC").replace(/[A-Za-z]+/g, (word) => greek[word] ?? word).replace(/[\s_,]/g, "").replace(/ϕ/g, "φ");
  let named = null;
  const indexNames = () => {
    named = new Map();
    const keep = (key, element) => named.get(key)?.push(element) ?? named.set(key, [element]);
    for (const element of every("main math msub, main math mi")) {
      if (element.localName === "mi" && element.parentElement.closest("msub")) continue;
      keep(keyOf(element.textContent), element);
    }
  };
  const wordsWith = (key, typed) => {
    const wanted = new Set([typed, key]);
    const walker = document.createTreeWalker(document.querySelector("main"), NodeFilter.SHOW_TEXT);
    const found = [];
    for (let node = walker.nextNode(); node; node = walker.nextNode()) {
      if (node.parentElement.closest("math, svg, script, .readout")) continue;
      for (const match of node.data.matchAll(/[\p{L}][\p{L}\p{N}_]*/gu)) {
        if (wanted.has(match[0]) || (match[0].includes("_") && keyOf(match[0]) === key)) {
          found.push([node, match.index, match[0].length]);
        }
      }
    }
    // From the last on, so that places in a node stay what they were.
    return found.reverse().map(([node, start, length]) => {
      const range = document.createRange();
      range.setStart(node, start);
      range.setEnd(node, start + length);
      const mark = make("mark", { className: "hit" });
      range.surroundContents(mark);
      return mark;
    });
  };
  const field = document.querySelector("#symbol");
  const told = document.querySelector("#found");
  const [previous, next] = every(".previous, .next");
  let hits = [];
  let current = -1;
  const clear = () => {
    for (const hit of hits) {
      hit.classList.remove("hit", "current");
      if (hit.localName === "mark") {
        const parent = hit.parentNode;
        hit.replaceWith(...hit.childNodes);
        parent.normalize();
      }
    }
    [hits, current] = [[], -1];
  };
  const search = () => {
    clear();
    const typed = field.value.trim();
    if (typed) {
      if (!named) indexNames();
      const inFormulas = named.get(keyOf(typed)) ?? [];
      for (const element of inFormulas) element.classList.add("hit");
      hits = [...inFormulas, ...wordsWith(keyOf(typed), typed)];
      hits.sort((a, b) => (a.compareDocumentPosition(b) & Node.DOCUMENT_POSITION_FOLLOWING ? -1 : 1));
    }
    previous.disabled = next.disabled = !hits.length;
    told.textContent = !typed ? "" : hits.length ? `${hits.length} found` : "not found";
  };
  const go = (by) => {
    if (!hits.length) return;
    hits[current]?.classList.remove("current");
    current = (current + by + hits.length) % hits.length;
    const hit = hits[current];
    hit.classList.add("current");
    openTo(hit);
    hit.scrollIntoView({ block: "center", inline: "nearest" });
    told.textContent = `${current + 1} of ${hits.length}`;
  };
  field.addEventListener("input", search);
  field.addEventListener("keydown", (event) => {
    if (event.key === "Enter" && event.shiftKey) {
      event.preventDefault();
      go(current < 0 ? 0 : -1);
    } else if (event.key === "Escape") {
      field.value = "";
      search();
    }
  });
  field.form.addEventListener("submit", (event) => {
    event.preventDefault();
    go(1);
  });
  previous.addEventListener("click", () => go(current < 0 ? 0 : -1));
  const ledger = JSON.parse(document.querySelector("#ledger").textContent || "{}");
  for (const name of Object.keys(ledger.symbols ?? {})) {
    document.querySelector("#symbols").append(make("option", { value: name }));
  }
  document.querySelector(".tools").hidden = false;

  // Curves: read off by pointer, and by the keys of a slider.
  const prefixes = { "-15": "f", "-12": "p", "-9": "n", "-6": "µ", "-3": "m", 0: "", 3: "k", 6: "M", 9: "G", 12: "T" };
  // Of decibels and degrees so many decimals as a drawn curve holds.
  const decimals = (unit) => (unit === "°" ? 1 : unit.startsWith("dB") ? 2 : null);
  const written = (value, unit) => {
    if (!isFinite(value)) return "–";
    const fixed = decimals(unit);
    if (fixed !== null) {
      const text = (Math.round(value * 10 ** fixed) / 10 ** fixed + 0).toFixed(fixed).replace("-", "−");
      return unit === "°" ? `${text}°` : `${text} ${unit}`;
    }
    const power = value && unit ? Math.min(12, Math.max(-15, 3 * Math.floor(Math.log10(Math.abs(value)) / 3))) : 0;
    const number = Number((value / 10 ** power).toPrecision(4));
    return `${number} ${prefixes[power]}${unit}`.trim().replace("-", "−");
  };
  const scale = (text) => {
    const [low, high, kind] = text.split(" ");
    const [a, b] = [Number(low), Number(high)];
    return kind === "decades"
      ? (share) => a * (b / a) ** share
      : (share) => a + (b - a) * share;
  };
  const heightAt = (points, x) => {
    if (!points.length || x < points[0][0] - 0.5 || x > points.at(-1)[0] + 0.5) return NaN;
    const place = Math.max(1, points.findIndex((point) => point[0] >= x));
    const [[x0, y0], [x1, y1]] = [points[place - 1] ?? points[0], points[place] ?? points[0]];
    return x1 === x0 ? y0 : y0 + ((y1 - y0) * (x - x0)) / (x1 - x0);
  };
  for (const svg of every("svg.plot[data-across]")) {
    const across = scale(svg.dataset.across);
    const [left, width] = svg.dataset.span.split(" ").map(Number);
    const fields = every(".field", svg).map((group) => ({
      top: Number(group.dataset.top),
      height: Number(group.dataset.height),
      title: group.dataset.title,
      unit: group.dataset.unit,
      up: scale(group.dataset.up),
      curves: every("polyline[data-name]", group).map((line) => ({
        name: line.dataset.name,
        points: line.getAttribute("points").split(" ").map((pair) => pair.split(",").map(Number)),
      })),
    }));
    const names = [...new Set(fields.flatMap((one) => one.curves.map((curve) => curve.name)))];
    const slider = make("input", { type: "range", min: 0, max: 1000, value: 500, step: 1 });
    slider.setAttribute("aria-label", `Read the curves at a ${svg.dataset.title.toLowerCase()}`);
    const shown = make("output", { textContent: "Read the curves: point at them, or move the slider with the arrow keys." });
    const box = make("div", { className: "readout" });
    box.append(slider, shown);
    svg.after(box);
    const lines = fields.map((one) => {
      const line = document.createElementNS(svg.namespaceURI, "line");
      line.setAttribute("class", "reading");
      line.setAttribute("y1", one.top);
      line.setAttribute("y2", one.top + one.height);
      line.setAttribute("visibility", "hidden");
      svg.append(line);
      return line;
    });
    const read = (share) => {
      const x = left + width * share;
      for (const line of lines) {
        line.setAttribute("x1", x);
        line.setAttribute("x2", x);
        line.setAttribute("visibility", "visible");
      }
      const at = written(across(share), svg.dataset.unit);
      const rows = names.map((name) => {
        const values = fields.map((one) => {
          const curve = one.curves.find((each) => each.name === name);
          const y = curve ? heightAt(curve.points, x) : NaN;
          return written(one.up(1 - (y - one.top) / one.height), one.unit);
        });
        return [name, ...values];
      });
      const table = make("table");
      for (const cells of [[at, ...fields.map((one) => one.title)], ...rows]) {
        const row = table.insertRow();
        cells.forEach((cell) => (row.insertCell().textContent = cell));
      }
      shown.replaceChildren(table);
      slider.setAttribute("aria-valuetext", [at, ...rows.map((row) => row.join(" "))].join("; "));
    };
    slider.addEventListener("input", () => read(slider.value / 1000));
    slider.addEventListener("focus", () => read(slider.value / 1000));
    const point = (event) => {
      const place = svg.getBoundingClientRect();
      const x = ((event.clientX - place.left) / place.width) * svg.viewBox.baseVal.width;
      const share = Math.min(1, Math.max(0, (x - left) / width));
      slider.value = Math.round(1000 * share);
      read(share);
    };
    svg.addEventListener("pointermove", point);
    svg.addEventListener("pointerdown", point);
  }

  // What scrolls sideways can be scrolled by keys as well.
  const scrollers = every(".formula, figure.table, figure.plot");
  const reach = () => {
    for (const one of scrollers) {
      const scrolls = one.scrollWidth > one.clientWidth + 1;
      if (scrolls && !one.hasAttribute("tabindex")) {
        one.tabIndex = 0;
        if (one.localName === "div") {
          one.setAttribute("role", "group");
          one.setAttribute("aria-label", "formula, scrolls sideways");
        }
      } else if (!scrolls && one.hasAttribute("tabindex")) {
        one.removeAttribute("tabindex");
        if (one.localName === "div") {
          one.removeAttribute("role");
          one.removeAttribute("aria-label");
        }
      }
    }
  };
  reach();
  addEventListener("resize", reach);
  for (const fold of folds) fold.addEventListener("toggle", reach);
})();

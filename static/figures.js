"use strict";
// Draws the live figures, keeps them in step with edits and with the light or dark page, and picks out a
// row's point. The page is whole without it: each figure stands there as a drawing already.
(function () {
  const settings = { displaylogo: false, displayModeBar: false, responsive: true, doubleClick: "reset" };
  const drawn = new Map(); // id of a figure -> its data as sent

  const colour = (text) => {
    const name = /^var\((--[a-z-]+)\)$/.exec(text);
    return name ? getComputedStyle(document.documentElement).getPropertyValue(name[1]).trim() : text;
  };
  // plotly knows no custom properties: their values of this moment take the place of the names
  const coloured = (value) => {
    if (typeof value === "string") return colour(value);
    if (Array.isArray(value)) return value.map(coloured);
    if (value && typeof value === "object") {
      return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, coloured(inner)]));
    }
    return value;
  };

  function show(target, figure) {
    const element = document.getElementById(target);
    if (!element || !window.Plotly) return Promise.resolve();
    element.hidden = false;
    element.style.height = `${figure.height}px`;
    return Plotly.react(element, coloured(figure.data), coloured(figure.layout), settings).then(() => {
      const still = element.parentElement.querySelector(".fig-still");
      if (still) still.hidden = true;
      if (!element.dataset.listens) {
        element.dataset.listens = "";
        element.on("plotly_click", (event) => {
          const key = event.points[0] && event.points[0].customdata;
          if (typeof key === "string") pick(key);
        });
      }
    });
  }

  function draw(root) {
    const blocks = root.querySelectorAll ? [...root.querySelectorAll(".fig-data:not([data-drawn])")] : [];
    if (root.matches && root.matches(".fig-data:not([data-drawn])")) blocks.push(root);
    const jobs = blocks.map((block) => {
      block.dataset.drawn = "";
      const figure = JSON.parse(block.textContent);
      drawn.set(block.dataset.target, figure);
      return show(block.dataset.target, figure);
    });
    return Promise.all(jobs).then(() => {
      const root = document.documentElement;
      if (jobs.length) root.dataset.figures = String(Number(root.dataset.figures || 0) + 1);
    });
  }

  // a row of the table and its point on every panel
  function pick(key) {
    for (const row of document.querySelectorAll("[data-point]")) {
      const same = row.dataset.point === key;
      row.classList.toggle("picked", same);
      if (same) row.setAttribute("data-picked", ""); else row.removeAttribute("data-picked");
    }
    for (const element of document.querySelectorAll(".fig")) {
      if (!element.data) continue;
      element.data.forEach((trace, index) => {
        if (!trace.customdata) return;
        const size = trace.customdata.map((k) => (k === key ? 15 : 9));
        const opacity = trace.customdata.map((k) => (k === key ? 1 : 0.35));
        Plotly.restyle(element, { "marker.size": [size], "marker.opacity": [opacity] }, [index]);
      });
    }
  }

  document.addEventListener("click", (event) => {
    const row = event.target.closest && event.target.closest("tr[data-point]");
    if (row && !event.target.closest("a, button, input, summary, label")) pick(row.dataset.point);
  });
  document.addEventListener("focusin", (event) => {
    const row = event.target.closest && event.target.closest("tr[data-point]");
    if (row) pick(row.dataset.point);
  });

  // columns of a table: what is chosen is kept for this browser, else it follows the width
  function columns() {
    for (const chooser of document.querySelectorAll("fieldset[data-columns]")) {
      const table = document.getElementById(chooser.dataset.columns);
      if (!table) continue;
      const key = `columns ${chooser.dataset.columns}`;
      let kept = null;
      try { kept = JSON.parse(localStorage.getItem(key) || "null"); } catch (error) { kept = null; }
      const wide = table.parentElement.clientWidth;
      for (const box of chooser.querySelectorAll("input[value]")) {
        box.checked = kept ? kept.includes(box.value) : wide >= Number(box.dataset.from);
        toggle(table, box);
      }
      chooser.hidden = false;
    }
  }
  function toggle(table, box) {
    for (const cell of table.querySelectorAll(`[data-group="${box.value}"]`)) cell.hidden = !box.checked;
  }
  document.addEventListener("change", (event) => {
    const chooser = event.target.closest && event.target.closest("fieldset[data-columns]");
    if (!chooser) return;
    const table = document.getElementById(chooser.dataset.columns);
    toggle(table, event.target);
    const chosen = [...chooser.querySelectorAll("input:checked")].map((box) => box.value);
    try { localStorage.setItem(`columns ${chooser.dataset.columns}`, JSON.stringify(chosen)); } catch (error) { /* private window: not kept */ }
  });

  const again = () => { for (const [target, figure] of drawn) show(target, figure); };
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", again);
  // on paper the server's drawing stands: it has the paper's width and colours
  const paper = (on) => {
    for (const element of document.querySelectorAll(".fig")) {
      const still = element.parentElement.querySelector(".fig-still");
      if (!still || !element.data) continue;
      element.hidden = on;
      still.hidden = !on;
    }
  };
  addEventListener("beforeprint", () => paper(true));
  addEventListener("afterprint", () => paper(false));
  // the chosen scenario is in sight, however long the row is
  const inSight = () => {
    const row = document.getElementById("scenario-row");
    const tab = row && row.querySelector("[aria-current]");
    if (tab) row.scrollLeft = tab.offsetLeft - row.offsetLeft - (row.clientWidth - tab.clientWidth) / 2;
  };
  document.addEventListener("DOMContentLoaded", () => { columns(); inSight(); draw(document); });
  // the fragment that came, not the target of the request: figures also arrive out of band
  document.addEventListener("htmx:afterSettle", (event) => { columns(); inSight(); draw(event.target); });
})();

"use strict";
// Tables: rows come in from a spreadsheet and go out to one; a grid of numbers is one field.
(function () {
  const lines = (text) => text.replace(/\r\n?/g, "\n").replace(/\n+$/, "").split("\n").map((line) => line.split("\t"));
  const shown = (control) => control.tagName === "SELECT" ? (control.value ? control.selectedOptions[0].textContent : "") : control.value;

  // ---- copy out: what the table shows, with its heads and units
  function textOf(list) {
    const rows = [[...list.querySelectorAll("thead th")].map((head) => {
      const unit = head.querySelector("select, .unit"), title = head.firstChild.textContent.trim();
      const symbol = unit ? (unit.tagName === "SELECT" ? shown(unit) : unit.textContent) : "";
      return symbol ? `${title} (${symbol})` : title;
    })];
    for (const row of list.querySelectorAll("tbody tr")) {
      const cells = [...row.querySelectorAll("td:not(.acts)")].map((cell) => {
        const control = cell.querySelector("[data-control], input[name=cell]");
        if (!control) return cell.textContent.trim();
        const unit = cell.querySelector(".unit");
        return unit && control.value ? `${shown(control)} ${unit.textContent}` : shown(control);
      });
      if (cells.some((cell) => cell !== "")) rows.push(cells);
    }
    return rows.map((row) => row.join("\t")).join("\n");
  }
  function copied(text) {
    if (navigator.clipboard && window.isSecureContext) return navigator.clipboard.writeText(text);
    const box = document.createElement("textarea");
    box.value = text;
    document.body.append(box);
    box.select();
    document.execCommand("copy");
    box.remove();
    return Promise.resolve();
  }
  document.addEventListener("click", (event) => {
    const button = event.target.closest("[data-copy-out]");
    if (!button) return;
    const list = document.getElementById(button.dataset.copyOut);
    const words = button.textContent;
    copied(textOf(list)).then(() => { button.textContent = "Copied"; }, () => { button.textContent = "The browser did not allow it"; })
      .then(() => setTimeout(() => { button.textContent = words; }, 2000));
  });

  // ---- paste rows into a table of items: they are kept in the box under it until all are good
  function pasteRows(control, text) {
    const table = control.closest("table[data-list]"), box = document.getElementById(`${table.parentElement.parentElement.id}--paste`);
    if (!box) return false;
    const cell = control.closest("td"), row = control.closest("tr");
    const column = [...row.children].indexOf(cell);
    box.open = true;
    const form = box.querySelector("form");
    form.querySelector("[name=item]").value = row.dataset.item;
    form.querySelector("[name=columns]").value = table.dataset.columns.split(" ").slice(column).join(" ");
    form.querySelector("[name=rows]").value = text;
    form.requestSubmit();
    return true;
  }

  // ---- a grid of numbers
  const gridOf = (el) => el && el.closest ? el.closest("form.grid") : null;
  const rowsOf = (form) => [...form.querySelectorAll("tbody tr")].map((row) => [...row.querySelectorAll("input[name=cell]")]);
  const gridText = (form) => rowsOf(form).map((row) => row.map((cell) => cell.value.trim()).join("\t")).join("\n");
  function addRow(form) {
    const body = form.querySelector("tbody"), last = body.lastElementChild, row = last.cloneNode(true);
    const number = body.children.length + 1;
    row.querySelector("th").textContent = String(number);
    for (const cell of row.querySelectorAll("input")) {
      cell.value = "";
      cell.removeAttribute("aria-invalid");
      cell.setAttribute("aria-label", cell.getAttribute("aria-label").replace(/\d+$/, String(number)));
    }
    body.append(row);
  }
  document.addEventListener("input", (event) => {
    const form = gridOf(event.target);
    if (form && event.target.closest("tr") === form.querySelector("tbody").lastElementChild && event.target.value) addRow(form);
  });
  // ---- headings of pasted rows: a column goes where its heading says, in the unit its heading says
  const HEADINGS = [["npsh_required", /npsh/], ["efficiency", /eff|η|\beta\b/], ["shaft_power", /power|\bb?hp\b|\bkw\b/],
    ["flow", /flow|capacity|discharge|\bq\b|gpm|l\/s|m[3³]\/h/], ["head", /head|lift|\btdh\b|\bh\b/]];
  const SAME_UNIT = { usgpm: "gpm", feet: "ft", foot: "ft", metres: "m", meters: "m", lps: "l/s", cfs: "ft³/s", bhp: "hp", percent: "%" };
  const plainUnit = (text) => {
    const unit = text.toLowerCase().replace(/[\s.]/g, "").replace(/(m|ft)3/g, "$1³");
    return SAME_UNIT[unit] || unit;
  };
  const isHeading = (cells) => cells.some((cell) => cell.trim()) && cells.every((cell) => !/^\s*[-+.]?\d/.test(cell));
  // the place and the unit of each pasted column; a sentence when a heading cannot be read
  function readHeadings(form, headings) {
    const names = [...form.querySelectorAll("thead th")].map((head) => head.dataset.column), found = [];
    for (const heading of headings) {
      const name = (HEADINGS.find(([, words]) => words.test(heading.toLowerCase())) || [])[0], at = names.indexOf(name);
      if (at < 0 || found.some((column) => column.at === at)) return `The heading “${heading.trim()}” is not a column of its own here`;
      const options = [...form.querySelectorAll("thead select")][at].options;
      const said = /[([]([^)\]]*)[)\]]/.exec(heading), words = said ? [said[1]] : heading.split(/[\s,]+/);
      const unit = [...options].find((option) => words.some((word) => plainUnit(word) === plainUnit(option.textContent)));
      if (said && !unit) return `“${said[1]}” in the heading “${heading.trim()}” is not a unit of that column`;
      found.push({ at, unit: unit && unit.value });
    }
    return found;
  }
  function pasteGrid(control, text) {
    const form = gridOf(control), rows = lines(text);
    const from = rowsOf(form), startRow = from.findIndex((row) => row.includes(control)), startColumn = from[startRow].indexOf(control);
    let places = null;
    if (isHeading(rows[0])) {
      let headings = rows.shift();
      // names in one row, units in the next
      if (rows.length && isHeading(rows[0])) {
        const units = rows.shift();
        headings = headings.map((heading, c) => units[c]?.trim() ? `${heading} (${units[c].replace(/[()[\]]/g, "").trim()})` : heading);
      }
      while (headings.length && !headings.at(-1).trim()) headings.pop();
      places = readHeadings(form, headings);
      if (typeof places === "string") {
        const said = document.getElementById(`${form.id}--said`);
        said.className = "refusal";
        said.textContent = `${places}; nothing was pasted. There are flow, head, efficiency, shaft power and NPSH required; change the heading, or paste the numbers alone.`;
        return;
      }
      places.forEach(({ at, unit }) => { if (unit) form.querySelectorAll("thead select")[at].value = unit; });
      // flow and head say a whole curve: nothing of the one before stays under or beside it
      const whole = startRow === 0 && [0, 1].every((at) => places.some((place) => place.at === at));
      if (whole) from.flat().forEach((cell) => { cell.value = ""; });
    }
    rows.forEach((cells, r) => {
      while (startRow + r >= form.querySelector("tbody").children.length) addRow(form);
      const row = rowsOf(form)[startRow + r];
      cells.forEach((value, c) => {
        const cell = row[places ? places[c]?.at : startColumn + c];
        if (cell) cell.value = value.trim();
      });
    });
    if (rowsOf(form).at(-1).some((cell) => cell.value)) addRow(form);
    htmx.trigger(form, "submit");
  }
  document.addEventListener("htmx:configRequest", (event) => {
    const form = gridOf(event.target);
    if (!form) return;
    form.dataset.sent = gridText(form);
    event.detail.parameters.delete("cell");
    event.detail.parameters.set("grid", form.dataset.sent);
    if (form.dataset.base) event.detail.parameters.set("base", form.dataset.base);
    form.dataset.sentBase = event.detail.parameters.get("base");
  });
  document.addEventListener("firmhead:cells", (event) => {
    const form = document.getElementById(event.detail.id);
    if (!form) return;
    const bad = new Set(event.detail.cells.map((cell) => cell.join()));
    rowsOf(form).forEach((row, r) => row.forEach((cell, c) => {
      if (bad.has(`${r},${c}`)) cell.setAttribute("aria-invalid", "true");
      else cell.removeAttribute("aria-invalid");
    }));
    const key = `firmhead:${form.closest("[data-station]").dataset.station}:${form.querySelector("[name=path]").value}`;
    try {
      if (event.detail.refused) sessionStorage.setItem(key, JSON.stringify({ grid: gridText(form), sentence: event.detail.refused, base: form.dataset.sentBase }));
      else sessionStorage.removeItem(key);
    } catch { /* the page still holds it */ }
    if (!event.detail.refused) delete form.dataset.base;
  });
  function putBack() {
    for (const form of document.querySelectorAll("form.grid")) {
      const key = `firmhead:${form.closest("[data-station]").dataset.station}:${form.querySelector("[name=path]").value}`;
      let was = null;
      try { was = JSON.parse(sessionStorage.getItem(key) || "null"); } catch { /* nothing was kept */ }
      if (!was || !was.grid || gridText(form) === was.grid) continue;
      lines(was.grid).forEach((cells, r) => {
        while (r >= form.querySelector("tbody").children.length) addRow(form);
        cells.forEach((value, c) => { const cell = rowsOf(form)[r][c]; if (cell) cell.value = value; });
      });
      if (was.base) form.dataset.base = was.base;
      const said = document.getElementById(`${form.id}--said`);
      if (said) { said.className = "refusal"; said.textContent = was.sentence; }
    }
  }

  document.addEventListener("paste", (event) => {
    const control = event.target;
    if (!control.matches || !control.matches("input, select")) return;
    const text = event.clipboardData.getData("text/plain");
    if (!/[\t\n]/.test(text.replace(/\n+$/, ""))) return;
    if (gridOf(control)) { event.preventDefault(); pasteGrid(control, text); }
    else if (control.closest("table[data-list]") && pasteRows(control, text)) event.preventDefault();
  });
  document.addEventListener("firmhead:drawn", putBack);
  putBack();
})();

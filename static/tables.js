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
  function pasteGrid(control, text) {
    const form = gridOf(control), rows = lines(text);
    const from = rowsOf(form), startRow = from.findIndex((row) => row.includes(control)), startColumn = from[startRow].indexOf(control);
    const numbers = rows[0].some((cell) => /\d/.test(cell)) ? rows : rows.slice(1);
    numbers.forEach((cells, r) => {
      while (startRow + r >= form.querySelector("tbody").children.length) addRow(form);
      const row = rowsOf(form)[startRow + r];
      cells.forEach((value, c) => { if (row[startColumn + c]) row[startColumn + c].value = value.trim(); });
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
      if (event.detail.refused) sessionStorage.setItem(key, JSON.stringify({ grid: gridText(form), sentence: event.detail.refused }));
      else sessionStorage.removeItem(key);
    } catch { /* the page still holds it */ }
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

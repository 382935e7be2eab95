"use strict";
// Fields that save themselves: one edit at a time in order, nothing typed is ever lost.
// The server answers with fragments that name their places; this file decides which may be put there.
(function () {
  const station = () => document.querySelector("[data-station]")?.dataset.station || "";
  const key = (path) => `firmhead:${station()}:${path}`;
  const controlOf = (form) => form.querySelector("[data-control]");
  const pathOf = (form) => form.querySelector("[name=path]").value;
  const formOf = (el) => el && el.closest ? el.closest("form.edit") : null;

  // what a control showed when it was drawn: a select has no defaultValue of its own
  function drawn(control) {
    if (control.tagName !== "SELECT") return control.defaultValue;
    const chosen = [...control.options].find((option) => option.defaultSelected) || control.options[0];
    return chosen ? chosen.value : "";
  }
  const isDirty = (control) => control.value !== drawn(control);

  // ---- keeping what was refused, over a reload and over a lost connection
  function keep(form, text, sentence) {
    try { sessionStorage.setItem(key(pathOf(form)), JSON.stringify({ text, sentence })); } catch { /* full or barred: the page still holds it */ }
  }
  function forget(path) {
    try { sessionStorage.removeItem(key(path)); } catch { /* nothing was kept */ }
  }
  function kept(path) {
    try { return JSON.parse(sessionStorage.getItem(key(path)) || "null"); } catch { return null; }
  }
  function showRefusal(form, sentence) {
    const field = form.closest(".field"), control = controlOf(form);
    if (!field || !control) return;
    field.classList.add("refused");
    control.setAttribute("aria-invalid", "true");
    let line = form.querySelector(".refusal");
    if (!line) {
      line = document.createElement("p");
      line.className = "refusal";
      line.id = `${control.id}--error`;
      (form.querySelector(".entry") || control).after(line);
      control.setAttribute("aria-describedby", [line.id, control.getAttribute("aria-describedby")].filter(Boolean).join(" "));
    }
    line.textContent = sentence;
  }
  function putBack(root) {
    for (const form of root.querySelectorAll("form.edit")) {
      const control = controlOf(form), was = control && kept(pathOf(form));
      if (!was || control.disabled) continue;
      if (form.closest(".field").classList.contains("refused")) continue;
      control.value = was.text;
      showRefusal(form, was.sentence);
    }
  }

  // back to what is stored: nothing to send, and nothing refused any more
  function settle(form) {
    const line = form.querySelector(".refusal");
    if (!line || line.querySelector(".hidden")) return;
    const control = controlOf(form);
    line.remove();
    form.closest(".field").classList.remove("refused");
    control.removeAttribute("aria-invalid");
    const left = (control.getAttribute("aria-describedby") || "").split(" ").filter((id) => id && id !== `${control.id}--error`);
    if (left.length) control.setAttribute("aria-describedby", left.join(" "));
    else control.removeAttribute("aria-describedby");
    forget(pathOf(form));
  }

  // ---- sending
  document.addEventListener("htmx:configRequest", (event) => {
    const form = event.target.closest("form.edit, form.act, form.grid, form.source");
    // rows that were refused on an older page are still measured against what they were typed over
    if (!form || form.dataset.base) return;
    const revision = document.getElementById("revision");
    if (revision) event.detail.parameters.set("base", revision.dataset.number);
    const control = controlOf(form);
    if (control) form.dataset.sent = control.value;
    delete form.dataset.waits;
  });
  // a button pressed while another edit is on its way waits for its turn, even if it is drawn anew
  document.addEventListener("submit", (event) => {
    const form = event.target.closest("form.act");
    if (form && event.submitter?.value) form.dataset.waits = event.submitter.value;
  }, true);
  document.addEventListener("htmx:beforeRequest", (event) => {
    const form = formOf(event.target), control = form && controlOf(form);
    if (!control) return;
    const button = event.detail.requestConfig.triggeringEvent?.submitter;
    const another = button && (button.name !== "op" || button.value !== "set");
    // Enter fires change and submit; the second has nothing new to say
    if (another || isDirty(control)) return;
    event.preventDefault();
    settle(form);
  });

  // ---- receiving
  let typed = new Map(), clicked = [], waiting = false;
  const send = (form) => { if (form.isConnected && isDirty(controlOf(form))) htmx.trigger(form, "submit"); };
  const wasOf = (form) => form.querySelector("[name=was]");
  const typedSince = (form, control) => control && isDirty(control) && form.dataset.sent !== control.value;
  document.addEventListener("htmx:oobBeforeSwap", (event) => {
    const target = event.detail.target;
    if (!target) return;
    // all fragments of an answer are put in their places before this runs
    if (!waiting) { waiting = true; queueMicrotask(swapped); }
    if (target.matches(".field")) {
      const form = target.querySelector("form.edit"), control = form && controlOf(form);
      if (!typedSince(form, control)) return;
      // typed in it since it was sent: the newer text stays, and saves itself when it is left
      event.detail.shouldSwap = false;
      const stored = event.detail.fragment.querySelector("[name=was]");
      if (stored) wasOf(form).value = stored.value;
      return;
    }
    for (const form of target.querySelectorAll("form.act[data-waits]")) {
      clicked.push({ path: pathOf(form), op: form.dataset.waits, before: form.querySelector("[name=before]")?.value || "" });
    }
    for (const form of target.querySelectorAll("form.edit")) {
      const control = controlOf(form);
      if (typedSince(form, control)) typed.set(control.id, { text: control.value, was: wasOf(form).value });
    }
  });
  function swapped() {
    waiting = false;
    for (const [id, had] of typed) {
      const control = document.getElementById(id);
      if (!control) continue;
      control.value = had.text;
      // what stood there when it was typed: if somebody has changed it, both values are shown
      wasOf(control.form).value = had.was;
      // its own request went with the old form; the browser tells no change of a text put back
      if (document.activeElement === control) control.addEventListener("blur", () => send(control.form), { once: true });
      else send(control.form);
    }
    typed = new Map();
    for (const { path, op, before } of clicked) {
      const same = [...document.querySelectorAll("form.act")].find((form) =>
        pathOf(form) === path && (form.querySelector("[name=before]")?.value || "") === before && form.querySelector(`button[value="${op}"]`));
      if (same) same.querySelector(`button[value="${op}"]`).click();
    }
    clicked = [];
    document.querySelectorAll(".field.refused").forEach(remember);
    putBack(document);
    document.dispatchEvent(new CustomEvent("firmhead:drawn"));
  }
  // a field that the server refused is kept over a reload until it is mended
  function remember(field) {
    const form = field.querySelector("form.edit"), control = form && controlOf(form);
    const line = control && form.querySelector(".refusal .hidden");
    if (line) keep(form, control.value, line.parentElement.textContent.replace(/^Error:\s*/, "").trim());
  }
  document.addEventListener("firmhead:saved", (event) => forget(event.detail.path));
  function unsent(event, sentence) {
    const form = formOf(event.target), control = form && controlOf(form);
    if (!control) return;
    keep(form, control.value, sentence);
    showRefusal(form, sentence);
  }
  document.addEventListener("htmx:sendError", (event) => unsent(event, "Not saved: Firmhead does not answer. What you typed stays here; change it or press Enter to send it again."));
  document.addEventListener("htmx:responseError", (event) => unsent(event, "Not saved: the server could not take it. What you typed stays here; press Enter to send it again."));

  window.addEventListener("beforeunload", (event) => {
    const open = [...document.querySelectorAll("form.edit")].some((form) => {
      const control = controlOf(form);
      return control && !control.disabled && typedSince(form, control) && !kept(pathOf(form));
    });
    if (open) event.preventDefault();
  });
  // a link followed while an edit is on its way waits for it, so that the next page shows it
  document.addEventListener("click", (event) => {
    const link = event.target.closest("a[href]");
    if (!link || event.button || event.metaKey || event.ctrlKey || event.shiftKey || link.hasAttribute("download")) return;
    if (link.origin !== location.origin || !document.querySelector(".htmx-request")) return;
    event.preventDefault();
    let gone = false;
    const go = () => {
      if (gone || document.querySelector(".htmx-request")) return;
      gone = true;
      location.assign(link.href);
    };
    document.addEventListener("htmx:afterRequest", () => setTimeout(go, 30));
    setTimeout(() => { if (!gone) { gone = true; location.assign(link.href); } }, 5000);
  });

  // a new item: its first field takes the focus
  document.addEventListener("firmhead:focus", (event) => {
    const item = document.getElementById(event.detail.id) || document.getElementById(`${event.detail.id}--text--field`);
    const control = item && item.querySelector("input:not([type=hidden]), select, textarea");
    if (control) { control.focus(); item.scrollIntoView({ block: "nearest" }); }
  });

  // a lost document is a station file dropped anywhere on the import box
  for (const box of document.querySelectorAll(".drop")) {
    const input = box.querySelector("input[type=file]");
    for (const name of ["dragenter", "dragover"]) box.addEventListener(name, (event) => { event.preventDefault(); box.classList.add("over"); });
    for (const name of ["dragleave", "drop"]) box.addEventListener(name, () => box.classList.remove("over"));
    box.addEventListener("drop", (event) => {
      event.preventDefault();
      if (!event.dataTransfer.files.length) return;
      input.files = event.dataTransfer.files;
      input.form.requestSubmit();
    });
  }

  putBack(document);
})();

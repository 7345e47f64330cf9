"use strict";
(function () {
  const read = (id) => JSON.parse(document.getElementById(id).textContent);
  const spec = read("spec");
  const columns = read("table-columns");
  const ROWS = 12;
  const STILL = 4; // px that a hand moves while clicking
  const designs = spec.datasets.designs;
  const host = document.getElementById("views");

  /* A press that does not move is a click, not a new and empty rectangle: the charts hear of it when it moves, or
     when it ends, then with Alt, at which no rectangle begins. */
  function keepGroupOnClick() {
    let held = null;
    let replaying = false;
    const replay = (altKey) => {
      const { clientX, clientY, button, buttons, pointerId, pointerType, target } = held;
      held = null;
      replaying = true;
      target.dispatchEvent(new PointerEvent("pointerdown", {
        bubbles: true, cancelable: true, view: window, clientX, clientY, button, buttons, pointerId, pointerType, altKey,
      }));
      replaying = false;
    };
    host.addEventListener("pointerdown", (event) => {
      if (replaying || event.button !== 0) return;
      held = event;
      event.stopPropagation();
    }, true);
    window.addEventListener("pointermove", (event) => {
      if (!held) return;
      if (Math.hypot(event.clientX - held.clientX, event.clientY - held.clientY) < STILL) {
        return;
      }
      replay(held.altKey);
    }, true);
    window.addEventListener("pointerup", () => { if (held) replay(true); }, true);
    window.addEventListener("pointercancel", () => { held = null; }, true);
  }

  function within(range, value) {
    return value >= Math.min(range[0], range[1]) && value <= Math.max(range[0], range[1]);
  }

  function chosenDesigns(view) {
    const group = view.signal("group");
    const classes = view.signal("classes").concept;
    const x = view.signal("x_axis");
    const y = view.signal("y_axis");
    const grouped = Boolean(group && group.x_value && group.y_value);
    const rows = designs.filter((design) =>
      (!classes || classes.length === 0 || classes.includes(design.concept)) &&
      (!grouped || (within(group.x_value, design[x]) && within(group.y_value, design[y]))));
    return { grouped, rows: rows.sort((a, b) => a[columns.first] - b[columns.first]) };
  }

  function cell(design, column) {
    const element = document.createElement("td");
    const value = design[column.field];
    if (typeof value === "number") {
      element.className = "figure";
      element.textContent = Number(value.toPrecision(3)).toString();
    } else {
      element.textContent = value === null || value === undefined ? "" : value;
    }
    return element;
  }

  function showTable(view) {
    const { grouped, rows } = chosenDesigns(view);
    const picked = view.signal("picked");
    const shown = rows.slice(0, ROWS);
    const which = grouped ? "in the group" : "drawn (no group: drag a rectangle in the front)";
    document.getElementById("count").textContent =
      `${rows.length} designs ${which}; the first ${shown.length} by ${columns.firstTitle}. A click on a row picks it.`;
    const body = document.querySelector("#table tbody");
    body.replaceChildren(...shown.map((design) => {
      const row = document.createElement("tr");
      row.tabIndex = 0;
      row.dataset.design = design.design_id;
      row.classList.toggle("picked", design.design_id === picked);
      row.append(...columns.columns.map((column) => cell(design, column)));
      return row;
    }));
  }

  function showState(view) {
    const pinned = view.signal("pinned").design_id;
    const fixed = view.signal("from_table") || (pinned && pinned.length > 0);
    const picked = view.signal("picked");
    document.getElementById("state").textContent = fixed
      ? `shown: ${picked}, pinned`
      : `shown: ${picked}, following the pointer`;
    document.querySelectorAll("#table tbody tr").forEach((row) =>
      row.classList.toggle("picked", row.dataset.design === picked));
  }

  function showHead() {
    const row = document.createElement("tr");
    row.append(...columns.columns.map((column) => {
      const head = document.createElement("th");
      head.scope = "col";
      head.textContent = column.title;
      head.classList.toggle("figure", typeof designs[0][column.field] === "number");
      return head;
    }));
    document.querySelector("#table thead").replaceChildren(row);
  }

  function pickFromTable(view) {
    const body = document.querySelector("#table tbody");
    const pick = (event) => {
      const row = event.target.closest("tr");
      if (row) view.signal("from_table", row.dataset.design).runAsync();
    };
    const release = () => view.signal("from_table", "").runAsync();
    body.addEventListener("click", pick);
    body.addEventListener("keydown", (event) => { if (event.key === "Enter") pick(event); });
    view.addSignalListener("pinned", release);
    host.addEventListener("dblclick", release);
    window.addEventListener("keydown", (event) => { if (event.key === "Escape") release(); });
  }

  function link(view) {
    let due = false;
    const afterwards = () => { // all signals of a change first, then the table once
      if (due) return;
      due = true;
      queueMicrotask(() => { due = false; showTable(view); showState(view); });
    };
    ["group", "classes", "x_axis", "y_axis"].forEach((name) => view.addSignalListener(name, afterwards));
    ["picked", "pinned", "from_table"].forEach((name) => view.addSignalListener(name, () => showState(view)));
    document.getElementById("clear").addEventListener("click", () =>
      window.dispatchEvent(new KeyboardEvent("keydown", { key: "Escape" })));
    pickFromTable(view);
    sideBySide(view, designs, read("beside-rows"));
    showHead();
    showTable(view);
    showState(view);
  }

  keepGroupOnClick();
  const options = {
    mode: "vega-lite",
    renderer: "canvas",
    bind: "#choices",
    actions: { export: true, source: false, compiled: false, editor: false },
    downloadFileName: "dashboard",
  };
  vegaEmbed("#views", spec, options).then((result) => {
    link(result.view);
    window.dashboardView = result.view;
    document.body.dataset.ready = "yes";
  }).catch((error) => {
    host.textContent = "The charts could not be drawn: " + error.message;
    console.error(error);
  });
})();

/* Two designs side by side: the one that is held, and the picked one; figures first, then every part. */
function sideBySide(view, designs, rows) {
  const byId = new Map(designs.map((design) => [design.design_id, design]));
  const section = document.getElementById("beside");
  const button = document.getElementById("hold");
  const shown = (value) => typeof value === "number" ? Number(value.toPrecision(3)).toString() : value ?? "";
  const put = (tag, text, figure) => {
    const element = document.createElement(tag);
    element.textContent = text;
    element.classList.toggle("figure", figure);
    return element;
  };

  function line(row, held, picked) {
    const element = document.createElement("tr");
    if (row.heading) {
      const cell = put("th", row.heading, false);
      cell.colSpan = 4;
      element.append(cell);
      return element;
    }
    const [before, after] = [held[row.field], picked[row.field]];
    const numbers = typeof before === "number" && typeof after === "number";
    const change = numbers ? after - before : null;
    const size = numbers ? Math.max(Math.abs(before), Math.abs(after)) : 0;
    const told = !numbers ? (before === after ? "same" : "other")
      : Math.abs(change) < 5e-4 * size || size === 0 ? "same"
      : (change > 0 ? "+" : "") + Number(change.toPrecision(3));
    element.append(put("td", row.title, false), put("td", shown(before), numbers), put("td", shown(after), numbers),
      put("td", told, numbers));
    element.classList.toggle("same", told === "same");
    return element;
  }

  function show() {
    const held = byId.get(view.signal("held"));
    const picked = byId.get(view.signal("picked"));
    section.hidden = !held;
    button.textContent = held ? `Let go of ${held.design_id}` : "Hold the picked design beside others";
    if (!held || !picked) return;
    document.getElementById("held-name").textContent = held.design_id;
    document.getElementById("picked-name").textContent = picked.design_id;
    document.querySelector("#beside tbody").replaceChildren(
      ...rows.filter((row) => row.heading || held[row.field] || picked[row.field]).map((row) => line(row, held, picked)));
  }

  button.addEventListener("click", () =>
    view.signal("held", view.signal("held") ? "" : view.signal("picked")).runAsync());
  view.addSignalListener("held", show);
  view.addSignalListener("picked", show);
  show();
}

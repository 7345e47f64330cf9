/* Runs in the page before anything else: listens to the console, and once the charts stand, points, drags and clicks. */
(function () {
  const heard = [];
  for (const level of ["warn", "error"]) {
    const before = console[level];
    console[level] = (...words) => { heard.push(level + ": " + words.join(" ")); before.apply(console, words); };
  }
  window.addEventListener("error", (event) => heard.push("uncaught: " + event.message));
  window.addEventListener("unhandledrejection", (event) => heard.push("unhandled: " + event.reason));
  document.addEventListener("securitypolicyviolation", (event) => heard.push("policy: " + event.violatedDirective));

  function items(view) {
    const found = [];
    const walk = (item, name, role, x, y) => {
      const inner = item.items || [];
      if (item.marktype) {
        inner.forEach((child) => walk(child, item.name || name, item.role || role, x, y));
      } else {
        const [left, top] = [x + (item.x || 0), y + (item.y || 0)];
        if (inner.length > 0) inner.forEach((child) => walk(child, name, role, left, top));
        else found.push({ name, role, x: left, y: top, datum: item.datum || {}, text: item.text });
      }
    };
    walk(view.scenegraph().root, "", "", 0, 0);
    return found;
  }

  const named = (view, base) => items(view).filter((item) => (item.name || "").startsWith(base));
  const moment = () => new Promise((go) => setTimeout(go, 20));
  const step = async (view) => { await view.runAsync(); await moment(); await view.runAsync(); };

  function send(view, type, place, target) {
    const canvas = document.querySelector("#views canvas");
    const box = canvas.getBoundingClientRect();
    const [left, top] = [view.origin()[0] + view.padding().left, view.origin()[1] + view.padding().top];
    const Kind = type.startsWith("pointer") ? PointerEvent : MouseEvent;
    (target || canvas).dispatchEvent(new Kind(type, {
      bubbles: true, cancelable: true, view: window, button: 0, buttons: 1, pointerType: "mouse",
      clientX: box.left + left + place.x, clientY: box.top + top + place.y,
    }));
  }

  async function click(view, place) {
    for (const type of ["pointermove", "pointerdown", "mousedown", "pointerup", "mouseup", "click"]) {
      send(view, type, place);
      await step(view);
    }
  }

  async function drag(view, from, to) {
    send(view, "pointermove", from);
    send(view, "pointerdown", from);
    for (const share of [0.1, 0.5, 1]) {
      send(view, "pointermove", { x: from.x + share * (to.x - from.x), y: from.y + share * (to.y - from.y) });
      await step(view);
    }
    send(view, "pointerup", to);
    await step(view);
  }

  function counts(view) {
    const told = {};
    items(view).forEach((item) => { const name = item.name || "?"; told[name] = (told[name] || 0) + 1; });
    return told;
  }

  function inked(canvas) {
    const { data } = canvas.getContext("2d").getImageData(0, 0, canvas.width, canvas.height);
    let count = 0;
    for (let place = 0; place < data.length; place += 4) {
      if (data[place + 3] > 0 && data[place] + data[place + 1] + data[place + 2] < 600) count += 1;
    }
    return count;
  }

  const rows = () => [...document.querySelectorAll("#table tbody tr")].map((row) => row.dataset.design);
  const state = (view) => ({
    picked: view.signal("picked"),
    group: view.signal("group"),
    pinned: view.signal("pinned").design_id || [],
    classes: view.signal("classes").concept || [],
    count: document.getElementById("count").textContent,
    rows: rows(),
    thin: named(view, "load_curve_group").length,
    parallel: named(view, "parallel_group").length,
    means: named(view, "loss_means").map((item) => item.datum.amount),
    bars: named(view, "loss_bars").map((item) => item.datum.amount),
    axis: named(view, "front_title_across").map((item) => item.text),
    words: named(view, "card_headline").map((item) => item.text),
  });

  async function use(view) {
    const told = { at_start: state(view), marks: counts(view), ink: inked(document.querySelector("#views canvas")) };
    const points = named(view, "front_points");
    const [one, other] = [points[3], points[points.length - 4]];
    send(view, "pointermove", one);
    await step(view);
    told.pointed = { ...state(view), wanted: one.datum.design_id };
    const xs = points.map((point) => point.x).sort((a, b) => a - b);
    const ys = points.map((point) => point.y).sort((a, b) => a - b);
    const middle = { x: xs[Math.floor(xs.length / 2)] + 0.5, y: ys[Math.floor(ys.length / 4)] - 0.5 };
    await drag(view, { x: xs[0] - 5, y: ys[ys.length - 1] + 5 }, middle);
    told.grouped = state(view);
    await click(view, other);
    told.pinned = { ...state(view), wanted: other.datum.design_id };
    send(view, "pointermove", one);
    await step(view);
    told.pinned_elsewhere = state(view);
    document.querySelector("#table tbody tr:nth-child(2)").click();
    await step(view);
    told.from_table = state(view);
    const axis = document.querySelector("select[name=x_axis]");
    axis.value = "price";
    axis.dispatchEvent(new Event("change", { bubbles: true }));
    await step(view);
    told.other_axis = state(view);
    document.getElementById("hold").click();
    await step(view);
    send(view, "pointermove", named(view, "front_points")[3]);
    document.querySelector("#table tbody tr:nth-child(3)").click();
    await step(view);
    told.beside = {
      held: view.signal("held"), picked: view.signal("picked"),
      names: ["held-name", "picked-name"].map((id) => document.getElementById(id).textContent),
      volume: [...document.querySelectorAll("#beside tbody tr")].map((row) => [...row.children].map((cell) => cell.textContent))
        .find((cells) => cells[0].startsWith("volume [")),
      rings: named(view, "front_held").map((item) => item.datum.design_id),
      dashed: named(view, "parallel_held").length,
    };
    document.getElementById("hold").click();
    await step(view);
    told.released = { held: view.signal("held"), hidden: document.getElementById("beside").hidden };
    document.getElementById("clear").click();
    await step(view);
    told.let_go = state(view);
    const label = items(view).find((item) => item.role === "legend-label" && item.text === "SiC MOSFET");
    await click(view, label);
    told.one_class = state(view);
    return told;
  }

  function report(told) {
    const element = document.createElement("pre");
    element.id = "report";
    element.textContent = JSON.stringify({ ...told, heard });
    document.body.append(element);
  }

  const waiting = setInterval(() => {
    if (!window.dashboardView) return;
    clearInterval(waiting);
    use(window.dashboardView).then(report, (error) => report({ failed: String(error.stack || error) }));
  }, 50);
})();

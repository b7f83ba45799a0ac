// Pan and zoom of a site plan. During a gesture only a CSS transform moves; the view box
// is set once at its end, so that labels and signs stay crisp. The keyboard does the same:
// arrows move, plus and minus zoom, 0 shows the whole site.

for (const figure of document.querySelectorAll("[data-plan]")) {
  const svg = figure.querySelector("svg.site-plan");
  if (svg) makeMovable(figure, svg);
}

function makeMovable(figure, svg) {
  const whole = svg.viewBox.baseVal;
  const full = { x: whole.x, y: whole.y, w: whole.width, h: whole.height };
  let view = { ...full };
  const pointers = new Map();
  let start = null;

  svg.tabIndex = 0;
  svg.setAttribute("aria-description", "Arrows move, plus and minus zoom, 0 shows all.");

  const show = (next) => {
    const w = Math.min(full.w * 1.5, Math.max(full.w / 60, next.w));
    const h = (w * full.h) / full.w;
    view = { x: next.x, y: next.y, w, h };
    svg.setAttribute("viewBox", `${view.x} ${view.y} ${view.w} ${view.h}`);
    // Signs and labels keep their size on screen while the ground grows.
    const scale = view.w / full.w;
    for (const use of svg.querySelectorAll("use")) {
      const x = use.getAttribute("x");
      const y = use.getAttribute("y");
      use.setAttribute("transform", `translate(${x} ${y}) scale(${scale}) translate(${-x} ${-y})`);
    }
    for (const text of svg.querySelectorAll(".mark text")) {
      text.setAttribute("font-size", 12 * scale);
      text.setAttribute("stroke-width", 3 * scale);
    }
    for (const part of svg.querySelectorAll(".scale-bar, .north")) {
      part.setAttribute("visibility", scale === 1 ? "visible" : "hidden");
    }
  };

  const zoom = (by, cx = 0.5, cy = 0.5) => {
    const w = view.w / by;
    const h = view.h / by;
    show({ x: view.x + (view.w - w) * cx, y: view.y + (view.h - h) * cy, w, h });
  };

  const place = (event) => {
    const box = svg.getBoundingClientRect();
    return [(event.clientX - box.left) / box.width, (event.clientY - box.top) / box.height];
  };

  const middle = () => {
    const all = [...pointers.values()];
    const x = all.reduce((sum, p) => sum + p.x, 0) / all.length;
    const y = all.reduce((sum, p) => sum + p.y, 0) / all.length;
    const apart = all.length > 1 ? Math.hypot(all[0].x - all[1].x, all[0].y - all[1].y) : 0;
    return { x, y, apart };
  };

  svg.addEventListener("pointerdown", (event) => {
    pointers.set(event.pointerId, { x: event.clientX, y: event.clientY });
    start = { ...middle(), moved: false };
  });

  svg.addEventListener("pointermove", (event) => {
    if (!pointers.has(event.pointerId) || !start) return;
    pointers.set(event.pointerId, { x: event.clientX, y: event.clientY });
    const now = middle();
    if (!start.moved && Math.hypot(now.x - start.x, now.y - start.y) < 5 && pointers.size < 2) return;
    if (!start.moved) svg.setPointerCapture(event.pointerId);
    start.moved = true;
    const grow = start.apart ? now.apart / start.apart : 1;
    svg.style.transform = `translate(${now.x - start.x}px, ${now.y - start.y}px) scale(${grow})`;
  });

  const end = (event) => {
    if (!pointers.has(event.pointerId)) return;
    const box = svg.getBoundingClientRect();
    const now = middle();
    pointers.delete(event.pointerId);
    if (!start || !start.moved) return;
    const grow = start.apart && now.apart ? now.apart / start.apart : 1;
    const width = box.width / grow;
    svg.style.transform = "";
    const unit = view.w / width;
    const w = view.w / grow;
    const h = view.h / grow;
    show({
      x: view.x - (now.x - start.x) * unit + (view.w - w) / 2,
      y: view.y - (now.y - start.y) * unit + (view.h - h) / 2,
      w,
      h,
    });
    svg.dataset.dragged = "";
    setTimeout(() => delete svg.dataset.dragged, 0);
    start = pointers.size ? { ...middle(), moved: false } : null;
  };
  svg.addEventListener("pointerup", end);
  svg.addEventListener("pointercancel", end);
  svg.addEventListener(
    "click",
    (event) => {
      // The end of a drag is no click on the mark beneath it.
      if ("dragged" in svg.dataset) event.preventDefault();
    },
    true,
  );

  svg.addEventListener(
    "wheel",
    (event) => {
      if (!event.ctrlKey && !event.metaKey) return;
      event.preventDefault();
      zoom(event.deltaY < 0 ? 1.2 : 1 / 1.2, ...place(event));
    },
    { passive: false },
  );

  svg.addEventListener("keydown", (event) => {
    const step = view.w / 8;
    const moves = {
      ArrowLeft: () => show({ ...view, x: view.x - step }),
      ArrowRight: () => show({ ...view, x: view.x + step }),
      ArrowUp: () => show({ ...view, y: view.y - step }),
      ArrowDown: () => show({ ...view, y: view.y + step }),
      "+": () => zoom(1.5),
      "=": () => zoom(1.5),
      "-": () => zoom(1 / 1.5),
      0: () => show({ ...full }),
    };
    if (event.target === svg && moves[event.key]) {
      event.preventDefault();
      moves[event.key]();
    }
  });

  figure.addEventListener("click", (event) => {
    const button = event.target.closest("[data-zoom]");
    if (!button) return;
    if (button.dataset.zoom === "fit") show({ ...full });
    else zoom(Number(button.dataset.zoom));
  });
}

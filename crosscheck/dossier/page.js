"use strict";
for (const box of document.querySelectorAll(".point")) {
  const content = JSON.parse(box.querySelector("script[type='application/json']").textContent);
  const select = box.querySelector("select");
  const reading = box.querySelector(".reading");
  const walls = Array.from(box.querySelectorAll(".wall"));
  let load = 0;
  let wall = 0;
  const add = (parent, name, text) => {
    const made = document.createElement(name);
    if (text !== undefined) made.textContent = text;
    parent.appendChild(made);
    return made;
  };
  const show = () => {
    reading.replaceChildren();
    add(reading, "h4", content.walls[wall] + ", " + (select ? select.options[load].text : ""));
    const table = add(reading, "table");
    const head = add(add(table, "thead"), "tr");
    for (const text of ["", "hand", "FE", ""]) add(head, "th", text);
    const body = add(table, "tbody");
    for (const line of (content.values[load] || [])[wall] || []) {
      const row = add(body, "tr");
      line.forEach((text, i) => { add(row, "td", text).className = i === 0 || i === 3 ? "text" : "number"; });
    }
    walls.forEach((each, i) => {
      each.classList.toggle("chosen", i === wall);
      each.setAttribute("aria-pressed", String(i === wall));
    });
  };
  walls.forEach((each, i) => {
    for (const event of ["pointerenter", "focus", "click"]) {
      each.addEventListener(event, () => { wall = i; show(); });
    }
  });
  if (select) {
    select.addEventListener("change", () => {
      load = select.selectedIndex;
      for (const flow of box.querySelectorAll(".flow")) {
        flow.classList.toggle("hidden-flow", Number(flow.dataset.load) !== load);
      }
      show();
    });
    select.selectedIndex = 0;
  }
  show();
}

"use strict";
/* The column is the navigation: point, tap or step with the keyboard through the beds. All text from the log is
   put in by textContent, so nothing that was typed in a cell can become markup. */
(() => {
  const { beds, columns: ledgerColumns, ledgers } = JSON.parse(document.getElementById("bed-data").textContent);
  const byKey = new Map(beds.map((bed, i) => [bed.key, i]));
  const card = document.getElementById("card-body");
  const status = document.getElementById("filter-status");
  let chosen = -1;
  let shown = beds.map((_, i) => i);

  const make = (tag, text, attributes = {}) => {
    const node = document.createElement(tag);
    if (text !== undefined) node.textContent = text;
    for (const [name, value] of Object.entries(attributes)) node.setAttribute(name, value);
    return node;
  };
  const nodesOf = (key) => document.querySelectorAll(`[data-bed="${CSS.escape(key)}"]`);

  const table = (headings, rows, caption) => {
    const node = make("table");
    if (caption) node.append(make("caption", caption));
    const head = make("tr");
    headings.forEach((h) => head.append(make("th", h, { scope: "col" })));
    const thead = make("thead");
    thead.append(head);
    const body = make("tbody");
    rows.forEach((row) => {
      const line = make("tr");
      row.forEach((cell) => line.append(make("td", cell)));
      body.append(line);
    });
    node.append(thead, body);
    return node;
  };

  const scrolled = (node, name) => {
    const box = make("div", undefined, { class: "scroll", tabindex: "0", role: "region", "aria-label": name });
    box.append(node);
    return box;
  };

  const showCard = (bed) => {
    card.replaceChildren();
    card.append(make("h3", bed.title));
    const facts = make("dl", undefined, { class: "facts" });
    bed.facts.forEach(([name, value]) => facts.append(make("dt", name), make("dd", value)));
    card.append(facts);
    bed.phases.forEach((phase) => {
      card.append(make("h4", phase.title));
      if (phase.values.length) card.append(table(["quantity", "P10", "P50", "P90", "unit"], phase.values));
      phase.words.forEach((line) => card.append(make("p", line)));
      if (phase.conflict) card.append(make("p", phase.conflict, { class: "conflict" }));
      if (phase.ledger !== null) card.append(scrolled(table(ledgerColumns, ledgers[phase.ledger], "Ledger: what each criterion says"), "Ledger of " + phase.title));
    });
    card.append(make("h4", "As written"));
    card.append(table(["column", "text"], bed.written));
    bed.findings.forEach((line) => card.append(make("p", line, { class: "small" })));
  };

  const frame = (svg, target) => {
    svg.querySelectorAll(".chosen-frame").forEach((old) => old.remove());
    const box = target.getBBox();
    const rect = document.createElementNS("http://www.w3.org/2000/svg", "rect");
    for (const [name, value] of Object.entries({ x: box.x, y: box.y, width: box.width, height: box.height }))
      rect.setAttribute(name, value);
    rect.setAttribute("class", "chosen-frame");
    target.parentNode.append(rect);
  };

  const choose = (index, from) => {
    if (index < 0 || index >= beds.length) return;
    const bed = beds[index];
    document.querySelectorAll(".chosen").forEach((node) => node.classList.remove("chosen"));
    document.querySelectorAll(".chosen-frame").forEach((node) => node.remove());
    chosen = index;
    nodesOf(bed.key).forEach((node) => {
      node.classList.add("chosen");
      const svg = node.closest(".sheets svg");
      if (svg) {
        frame(svg, node);
        if (from !== "column") node.scrollIntoView({ block: "nearest" });
      }
    });
    showCard(bed);
    if (history.replaceState) history.replaceState(null, "", "#" + bed.key);
  };

  const step = (by) => {
    if (!shown.length) return;
    const at = shown.indexOf(chosen);
    const next = at < 0 ? (by > 0 ? 0 : shown.length - 1) : Math.min(Math.max(at + by, 0), shown.length - 1);
    choose(shown[next], "keys");
  };

  document.querySelectorAll("[data-bed]").forEach((node) => {
    const index = byKey.get(node.getAttribute("data-bed"));
    if (index === undefined) return;
    const from = node.closest(".sheets") ? "column" : "other";
    node.addEventListener("click", () => choose(index, from));
  });

  const column = document.getElementById("column");
  column.addEventListener("keydown", (event) => {
    const moves = { ArrowUp: 1, ArrowDown: -1, PageUp: 10, PageDown: -10, Home: Infinity, End: -Infinity };
    if (!(event.key in moves)) return;
    event.preventDefault();
    const by = moves[event.key];
    if (by === Infinity) choose(shown[shown.length - 1], "keys");
    else if (by === -Infinity) choose(shown[0], "keys");
    else step(by);
  });
  document.getElementById("step-up").addEventListener("click", () => step(1));
  document.getElementById("step-down").addEventListener("click", () => step(-1));

  const form = document.getElementById("filter");
  const filter = () => {
    const wanted = Object.fromEntries(new FormData(form));
    shown = [];
    beds.forEach((bed, i) => {
      const fits = Object.entries(wanted).every(([kind, value]) => !value || (bed.tags[kind] || []).includes(value));
      if (fits) shown.push(i);
      nodesOf(bed.key).forEach((node) => {
        if (node.tagName === "TR") node.classList.toggle("hidden", !fits);
        else node.classList.toggle("dim", !fits);
      });
    });
    status.textContent = `${shown.length} of ${beds.length} beds`;
  };
  form.addEventListener("change", filter);
  form.addEventListener("reset", () => setTimeout(filter));
  form.addEventListener("submit", (event) => event.preventDefault());

  const quote = (cell) => (/[",\r\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell);
  const asCsv = (node) => {
    // a line that runs across names the rows under it; as CSV it becomes their first column
    const grouped = node.querySelector("tr.across") !== null;
    let group = "rows of";
    const lines = [];
    node.querySelectorAll("tr:not(.hidden)").forEach((row) => {
      const cells = [...row.cells].map((c) => c.textContent);
      if (row.classList.contains("across")) group = cells[0];
      else lines.push((grouped ? [group, ...cells] : cells).map(quote).join(","));
    });
    return lines.join("\n") + "\n";
  };
  document.querySelectorAll("button.copy").forEach((button) => {
    button.addEventListener("click", async () => {
      const csv = asCsv(document.getElementById(button.dataset.table));
      const said = button.nextElementSibling;
      try {
        await navigator.clipboard.writeText(csv);
        said.textContent = "copied";
      } catch {
        const area = make("textarea", csv, { "aria-label": "Table as CSV", rows: "4", style: "width:100%" });
        button.closest(".table").append(area);
        area.select();
        said.textContent = "select and copy below";
      }
    });
  });

  filter();
  const start = byKey.get(decodeURIComponent(location.hash.slice(1)));
  if (start !== undefined) choose(start, "other");
})();

// Sorting and filtering of the long tables. The page says everything without this.
"use strict";
(() => {
  const key = (row, column, numeric) => {
    const cell = row.cells[column];
    const text = cell.dataset.value ?? cell.textContent.trim();
    return numeric ? (text === "" || Number.isNaN(Number(text)) ? null : Number(text)) : text;
  };
  const compare = (a, b, sign, numeric) => {
    // What has no number stays at the end in either direction.
    if (a === null || b === null) return (a === null) - (b === null);
    return sign * (numeric ? a - b : a.localeCompare(b, "en", { numeric: true }));
  };
  const sort = (table, header) => {
    const ascending = header.getAttribute("aria-sort") !== "ascending";
    const numeric = header.dataset.sort === "number";
    const body = table.tBodies[0];
    const rows = [...body.rows].map((row, at) => ({ row, at, key: key(row, header.cellIndex, numeric) }));
    rows.sort((a, b) => compare(a.key, b.key, ascending ? 1 : -1, numeric) || a.at - b.at);
    for (const other of table.tHead.rows[0].cells) other.removeAttribute("aria-sort");
    header.setAttribute("aria-sort", ascending ? "ascending" : "descending");
    body.append(...rows.map((entry) => entry.row));
  };
  const filter = (table, words, output) => {
    const wanted = words.toLowerCase().split(/\s+/).filter(Boolean);
    let shown = 0;
    for (const row of table.tBodies[0].rows) {
      const text = [...row.cells].map((cell) => cell.textContent).join(" ").toLowerCase();
      row.hidden = !wanted.every((word) => text.includes(word));
      if (!row.hidden) shown += 1;
    }
    output.textContent = `${shown} of ${table.tBodies[0].rows.length} ${table.dataset.name}`;
  };
  for (const [at, table] of document.querySelectorAll("table.long").entries()) {
    for (const header of table.tHead.rows[0].cells) {
      const button = document.createElement("button");
      button.type = "button";
      button.append(...header.childNodes);
      button.addEventListener("click", () => sort(table, header));
      header.append(button);
    }
    const bar = document.createElement("div");
    bar.className = "filter";
    const label = document.createElement("label");
    const input = document.createElement("input");
    const output = document.createElement("output");
    input.type = "search";
    input.id = `filter-${at}`;
    label.htmlFor = input.id;
    label.textContent = `Show ${table.dataset.name} with`;
    output.htmlFor = input.id;
    output.setAttribute("aria-live", "polite");
    input.addEventListener("input", () => filter(table, input.value, output));
    bar.append(label, input, output);
    filter(table, "", output);
    table.parentElement.before(bar);
  }
  // What is folded on the screen stands open on paper.
  const folded = [...document.querySelectorAll("details")];
  addEventListener("beforeprint", () => folded.forEach((part) => { part.dataset.was = part.open; part.open = true; }));
  addEventListener("afterprint", () => folded.forEach((part) => { part.open = part.dataset.was === "true"; }));
})();

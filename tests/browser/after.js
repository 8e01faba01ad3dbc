// Does what a person would do, and leaves what it saw in the page.
"use strict";
addEventListener("load", () => {
  const seen = {};
  try {
    const table = document.querySelector("#sets table");
    const head = [...table.tHead.rows[0].cells];
    const header = (text) => head.find((cell) => cell.textContent.startsWith(text));
    const column = (text) => [...table.tBodies[0].rows].filter((row) => !row.hidden).map((row) => row.cells[header(text).cellIndex].textContent.trim());
    seen.rows = table.tBodies[0].rows.length;
    seen.sort = {};
    for (const text of ["Energy", "Electrons", "Label", "Orbitals"]) {
      const button = header(text).querySelector("button");
      button.focus();
      const focused = document.activeElement === button && button.tabIndex === 0 && button.matches(":focus");
      button.click();
      const up = { state: header(text).getAttribute("aria-sort"), values: column(text) };
      button.click();
      const down = { state: header(text).getAttribute("aria-sort"), values: column(text) };
      const marked = head.filter((cell) => cell.hasAttribute("aria-sort")).length;
      seen.sort[text] = { focused, up, down, marked };
    }
    const bar = table.closest("section").querySelector(".filter");
    const [input, output] = [bar.querySelector("input"), bar.querySelector("output")];
    seen.named = bar.querySelector("label").htmlFor === input.id;
    const type = (text) => { input.value = text; input.dispatchEvent(new Event("input", { bubbles: true })); };
    seen.filter = {};
    for (const text of ["", "t2g", "LUMO", "co 3d", "no such thing"]) {
      type(text);
      const rows = [...table.tBodies[0].rows];
      seen.filter[text] = {
        count: output.textContent,
        shown: rows.filter((row) => row.getClientRects().length > 0).map((row) => row.textContent),
        hidden: rows.filter((row) => row.getClientRects().length === 0).length,
      };
    }
    type("");
    seen.first = document.querySelector("a, button, input, summary, [tabindex]").getAttribute("href");
    seen.targets = [...document.querySelectorAll("a[href]")].map((link) => link.getAttribute("href")).filter((href) => !href.startsWith("#") || !document.querySelector(href));
    seen.images = [...document.images].map((image) => ({ width: image.naturalWidth, alt: image.alt }));
    seen.overflow = document.documentElement.scrollWidth - document.documentElement.clientWidth;
    seen.ids = [...document.querySelectorAll("[id]")].map((part) => part.id).filter((id, at, all) => all.indexOf(id) !== at);
    const channels = (colour) => colour.match(/[\d.]+/g).slice(0, 3).map((channel) => { const c = channel / 255; return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4; });
    const luminance = (colour) => { const [r, g, b] = channels(colour); return 0.2126 * r + 0.7152 * g + 0.0722 * b; };
    const paper = luminance(getComputedStyle(document.body).backgroundColor);
    const contrast = (part) => { const ink = luminance(getComputedStyle(part).color); return (Math.max(ink, paper) + 0.05) / (Math.min(ink, paper) + 0.05); };
    seen.paper = paper;
    seen.contrast = ["body", ".note", ".aside", "a", ".verdict", ".source"].map((part) => contrast(document.querySelector(part)));
    seen.canvas = document.querySelectorAll("canvas").length;
  } catch (error) {
    failures.push(`driver: ${error.stack}`);
  }
  seen.failures = failures;
  const note = document.createElement("pre");
  note.id = "findings";
  note.textContent = btoa(unescape(encodeURIComponent(JSON.stringify(seen))));
  document.body.append(note);
});

"use strict";
// Headings become buttons that sort their table: up, down, as it was. Without this the page says all the same.
for (const table of document.querySelectorAll("table.sortable")) {
  const body = table.tBodies[0], asItWas = [...body.rows];
  [...table.tHead.rows[0].cells].forEach((head, place) => {
    const button = document.createElement("button");
    button.type = "button";
    button.append(...head.childNodes);
    head.append(button);
    button.addEventListener("click", () => {
      const before = head.getAttribute("aria-sort");
      for (const other of table.tHead.rows[0].cells) other.removeAttribute("aria-sort");
      const way = before === null ? 1 : before === "ascending" ? -1 : 0;
      if (way) head.setAttribute("aria-sort", way > 0 ? "ascending" : "descending");
      const text = (row) => row.cells[place].textContent.trim();
      const rows = [...asItWas];
      if (way) rows.sort((one, two) => {
        const a = text(one), b = text(two), x = Number(a), y = Number(b);
        const known = [a !== "" && !Number.isNaN(x), b !== "" && !Number.isNaN(y)];
        if (known[0] !== known[1]) return known[0] ? -1 : 1;
        return way * (known[0] ? x - y : a.localeCompare(b));
      });
      body.append(...rows);
    });
  });
}

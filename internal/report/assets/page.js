"use strict";
// Unpacks the data behind the figures, for download and as tables.
(() => {
  const mostRows = 400;

  async function unpack(id) {
    const text = document.getElementById(id).textContent.replaceAll("-", "+").replaceAll("_", "/");
    const bytes = Uint8Array.from(atob(text), (c) => c.charCodeAt(0));
    const stream = new Blob([bytes]).stream().pipeThrough(new DecompressionStream("gzip"));
    return new Response(stream).text();
  }

  function download(text, name) {
    const link = document.createElement("a");
    link.href = URL.createObjectURL(new Blob([text], { type: "text/csv" }));
    link.download = name;
    link.click();
    setTimeout(() => URL.revokeObjectURL(link.href), 1000);
  }

  // One line of CSV; quotes are doubled inside of quotes.
  function cells(line) {
    const list = [];
    for (const m of line.matchAll(/(?:^|,)(?:"((?:[^"]|"")*)"|([^,]*))/g)) {
      list.push(m[1] === undefined ? m[2] : m[1].replaceAll('""', '"'));
    }
    return list;
  }

  function fill(place, text) {
    const lines = text.trimEnd().split("\n");
    const table = document.createElement("table");
    const rows = lines.slice(0, mostRows + 1);
    const verdict = cells(lines[0]).indexOf("verdict");
    rows.forEach((line, i) => {
      const row = table.insertRow();
      const values = cells(line);
      for (const value of values) {
        const cell = document.createElement(i ? "td" : "th");
        if (!i) cell.scope = "col";
        if (i && values[verdict] === "fail") cell.className = "failed";
        cell.textContent = value;
        row.append(cell);
      }
    });
    place.replaceChildren(table);
    if (lines.length - 1 > mostRows) {
      const note = document.createElement("p");
      note.textContent = `The first ${mostRows} of ${lines.length - 1} rows; the CSV holds all.`;
      place.append(note);
    }
  }

  for (const button of document.querySelectorAll("button[data-csv]")) {
    button.addEventListener("click", async () => {
      download(await unpack(button.dataset.csv), button.dataset.file);
    });
  }
  for (const details of document.querySelectorAll("details[data-table]")) {
    details.addEventListener("toggle", async () => {
      const place = details.querySelector("div");
      if (details.open && !place.firstChild) fill(place, await unpack(details.dataset.table));
    });
  }
})();

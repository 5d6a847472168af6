"use strict";
// Ranks and filters the builds of the index. Everything is on the page without it.
(() => {
  const ranking = document.querySelector(".ranking");
  const form = document.querySelector(".filters");
  const status = form.querySelector("[role=status]");
  const heads = [...ranking.querySelectorAll("th[data-best]")];
  const rowsOf = new Map();
  for (const row of document.querySelectorAll("tr[data-build]")) {
    rowsOf.set(row.dataset.build, [...(rowsOf.get(row.dataset.build) ?? []), row]);
  }
  const builds = [...ranking.tBodies[0].rows].map((row) => ({
    row,
    places: row.dataset.places.split(" ").map(Number),
    words: `${row.cells[1].textContent} ${row.dataset.build}`.toLowerCase(),
    rows: rowsOf.get(row.dataset.build),
  }));
  let column = heads.findIndex((head) => head.hasAttribute("aria-sort"));
  let bestFirst = true;

  // The first of the columns is the name: it orders the builds and leaves their rank.
  function arrange() {
    const known = builds.filter((build) => build.places[column]);
    const rest = builds.filter((build) => !build.places[column]);
    known.sort((one, other) => one.places[column] - other.places[column]);
    if (column > 0) {
      for (const build of builds) build.row.cells[0].textContent = build.places[column] || "\u2013";
    }
    if (!bestFirst) known.reverse();
    for (const build of [...known, ...rest]) {
      for (const row of build.rows) row.parentNode.append(row);
    }
    heads.forEach((head, place) => {
      const up = bestFirst === (head.dataset.best === "ascending");
      if (place === column) head.setAttribute("aria-sort", up ? "ascending" : "descending");
      else head.removeAttribute("aria-sort");
    });
  }

  function choose(place) {
    bestFirst = place !== column || !bestFirst;
    column = place;
    arrange();
    tell();
  }

  function filter() {
    const asked = new FormData(form);
    const words = asked.get("words").toLowerCase().split(/\s+/);
    const fits = (build) => words.every((word) => build.words.includes(word))
      && ["standing", "judgement"].every((name) => !asked.get(name) || asked.get(name) === build.row.dataset[name]);
    for (const build of builds) {
      const hidden = !fits(build);
      for (const row of build.rows) row.hidden = hidden;
    }
    tell();
  }

  function tell() {
    const shown = builds.filter((build) => !build.row.hidden).length;
    const by = heads[column].querySelector(".label").textContent;
    const order = column ? ["best first", "worst first"] : ["A to Z", "Z to A"];
    status.textContent = `${shown} of ${builds.length} builds shown. Order: ${by}, ${order[bestFirst ? 0 : 1]}.`;
  }

  heads.forEach((head, place) => {
    const button = document.createElement("button");
    button.type = "button";
    button.append(...head.childNodes);
    button.addEventListener("click", () => choose(place));
    head.append(button);
  });
  form.addEventListener("input", filter);
  form.addEventListener("submit", (event) => event.preventDefault());
  form.addEventListener("reset", () => setTimeout(filter));
  form.hidden = false;
  for (const words of ranking.querySelectorAll(".order")) words.hidden = !words.hidden;
  filter();
})();

"use strict";
(() => {
  const byId = (id) => document.getElementById(id);
  const body = document.querySelector(".beams tbody");
  const rows = [...body.rows];
  const rowOfKey = new Map(rows.map((row) => [row.dataset.key, row]));
  const planLinks = new Map();
  for (const link of document.querySelectorAll(".plan a")) planLinks.set(link.dataset.row, link);
  const views = { summary: byId("summary"), sheet: byId("sheet-view"), all: byId("all-view") };
  const perBlock = Number(views.sheet.dataset.perBlock);
  const title = document.title;
  const numberOf = (row) => Number(row.id.slice(1));
  const markOf = (row) => row.cells[0].textContent;
  const listed = () => [...body.rows].filter((row) => !row.hidden);

  /* sheets */
  const inflated = new Map();
  const inflate = async (block) => {
    const packed = Uint8Array.from(atob(byId("k" + block).textContent), (c) => c.charCodeAt(0));
    const stream = new Blob([packed]).stream().pipeThrough(new DecompressionStream("deflate-raw"));
    return (await new Response(stream).text()).split("\x1e");
  };
  const sheetOf = async (row) => {
    const block = Math.floor(numberOf(row) / perBlock);
    if (!inflated.has(block)) {
      if (inflated.size > 40) inflated.clear();
      inflated.set(block, inflate(block));
    }
    return (await inflated.get(block))[numberOf(row) % perBlock];
  };
  const made = (html) => {
    const holder = document.createElement("template");
    holder.innerHTML = html;
    return holder.content;
  };

  /* views */
  let opened = null;
  let scrolled = 0;
  let current = "summary";
  const turnTo = (name) => {
    if (current === "summary") scrolled = window.scrollY;
    for (const [each, view] of Object.entries(views)) view.hidden = each !== name;
    if (name !== "sheet") views.sheet.querySelector(".pages").replaceChildren();
    if (name !== "all") views.all.querySelector(".pages").replaceChildren();
    current = name;
  };
  const showSummary = () => {
    const from = current;
    turnTo("summary");
    document.title = title;
    if (from === "summary") return;
    window.scrollTo(0, scrolled);
    if (opened) opened.cells[0].firstElementChild.focus({ preventScroll: true });
  };
  const neighbours = (row) => {
    const order = row.hidden ? rows : listed();
    const at = order.indexOf(row);
    return { before: order[at - 1], after: order[at + 1], at, of: order.length };
  };
  const showSheet = async (row) => {
    const sheet = made(await sheetOf(row));
    if (asked() !== row) return;
    turnTo("sheet");
    opened = row;
    views.sheet.querySelector(".pages").replaceChildren(sheet);
    const { before, after, at, of } = neighbours(row);
    byId("previous").disabled = !before;
    byId("next").disabled = !after;
    views.sheet.querySelector(".where").textContent = `${at + 1} of ${of} listed beams`;
    document.title = `${markOf(row)} – ${title}`;
    window.scrollTo(0, 0);
    const head = views.sheet.querySelector("h2");
    head.tabIndex = -1;
    head.focus({ preventScroll: true });
  };
  const showAll = async () => {
    const order = listed();
    turnTo("all");
    const pages = views.all.querySelector(".pages");
    const where = views.all.querySelector(".where");
    byId("print-now").disabled = true;
    for (const [i, row] of order.entries()) {
      const sheet = made(await sheetOf(row));
      if (current !== "all") return;
      pages.append(sheet);
      if (i % 50 === 0) {
        where.textContent = `laying out sheet ${i + 1} of ${order.length}`;
        await new Promise((next) => setTimeout(next));
      }
    }
    where.textContent = `${order.length} ${order.length === 1 ? "sheet" : "sheets"}, ready to print`;
    byId("print-now").disabled = false;
  };
  const addressOf = (row) => "#beam=" + encodeURIComponent(row.dataset.key);
  const asked = () => {
    const found = /^#beam=(.*)$/.exec(location.hash);
    if (!found) return undefined;
    try {
      return rowOfKey.get(decodeURIComponent(found[1]));
    } catch (error) {
      if (error instanceof URIError) return undefined;
      throw error;
    }
  };
  const follow = () => {
    const row = asked();
    if (row) return showSheet(row);
    if (location.hash === "#all-sheets") return showAll();
    return showSummary();
  };
  const open = (row) => { if (row) location.hash = addressOf(row); };
  const close = () => { location.hash = "#beams-listed"; };
  window.addEventListener("hashchange", follow);
  document.addEventListener("click", (event) => {
    const link = event.target.closest("a[data-row]");
    if (!link || event.ctrlKey || event.metaKey || event.shiftKey) return;
    event.preventDefault();
    open(byId("r" + link.dataset.row));
  });
  document.addEventListener("keydown", (event) => {
    if (event.key === "Escape" && current !== "summary") close();
  });
  byId("back").addEventListener("click", close);
  byId("leave").addEventListener("click", close);
  byId("previous").addEventListener("click", () => open(neighbours(asked()).before));
  byId("next").addEventListener("click", () => open(neighbours(asked()).after));
  byId("print-one").addEventListener("click", () => window.print());
  byId("print-now").addEventListener("click", () => window.print());
  byId("print-all").addEventListener("click", () => { location.hash = "#all-sheets"; });

  /* sorting */
  const heads = [...document.querySelectorAll(".beams thead th")];
  const inWords = new Intl.Collator("en", { numeric: true, sensitivity: "base" });
  const textAt = (row, column) => row.cells[column].textContent;
  const numberAt = (row, column) => {
    const cell = row.cells[column];
    const text = cell.dataset.v ?? cell.textContent;
    return text === "" ? NaN : Number(text);
  };
  const byNumber = (column, way) => (a, b) => {
    const first = numberAt(a, column);
    const second = numberAt(b, column);
    if (Number.isNaN(first) || Number.isNaN(second)) return Number.isNaN(first) - Number.isNaN(second);
    return first === second ? 0 : way * (first < second ? -1 : 1);
  };
  const byText = (column, way) => (a, b) => way * inWords.compare(textAt(a, column), textAt(b, column));
  const sortBy = (head, column) => {
    const way = head.ariaSort === "ascending" ? -1 : 1;
    const order = head.dataset.sort === "number" ? byNumber(column, way) : byText(column, way);
    body.append(...[...rows].sort(order));
    for (const each of heads) each.removeAttribute("aria-sort");
    head.setAttribute("aria-sort", way > 0 ? "ascending" : "descending");
  };
  heads.forEach((head, column) => {
    const button = document.createElement("button");
    button.type = "button";
    button.append(...head.childNodes);
    head.append(button);
    button.addEventListener("click", () => sortBy(head, column));
  });

  /* filters */
  const form = document.querySelector(".filters");
  const shown = document.querySelector(".shown");
  const marks = rows.map((row) => markOf(row).toLowerCase());
  const literal = (text) => text.replace(/[.+?^${}()|[\]\\]/g, "\\$&");
  const pattern = (text) => {
    const words = text.toLowerCase().split(/[\s,;]+/).filter(Boolean);
    if (!words.length) return () => true;
    const tests = words.map((word) => (word.includes("*")
      ? new RegExp("^" + word.split("*").map(literal).join(".*") + "$", "s")
      : { test: (mark) => mark.includes(word) }));
    return (mark) => tests.some((test) => test.test(mark));
  };
  const filter = () => {
    const value = Object.fromEntries(new FormData(form));
    const named = pattern(value.mark);
    const from = value.from ? Number(value.from) : -Infinity;
    const to = value.to ? Number(value.to) : Infinity;
    const bounded = Boolean(value.from || value.to);
    const factor = value.factor ? Number(value.factor) : NaN;
    let count = 0;
    for (const row of rows) {
      const used = numberAt(row, 5);
      const keep = named(marks[numberOf(row)])
        && (!value.storey || row.dataset.s === value.storey)
        && (!value.verdict || row.dataset.v === value.verdict)
        && (!value.governs || row.dataset.g === value.governs)
        && (!bounded || (used >= from && used <= to))
        && (Number.isNaN(factor) || numberAt(row, 8 + 2 * Number(value.case)) <= factor);
      row.hidden = !keep;
      count += keep;
      planLinks.get(row.id.slice(1))?.classList.toggle("faint", !keep);
    }
    shown.textContent = count === rows.length ? `${count} listed` : `${count} of ${rows.length} listed`;
    byId("print-all").disabled = !count;
  };
  form.hidden = false;
  form.addEventListener("input", filter);
  form.addEventListener("submit", (event) => event.preventDefault());
  form.addEventListener("reset", () => setTimeout(filter));
  filter();

  /* plans */
  const figures = [...document.querySelectorAll("figure.storey")];
  const tabs = document.querySelector(".storeys");
  const choose = (chosen) => {
    figures.forEach((figure) => figure.classList.toggle("off", chosen !== null && figure !== chosen));
    [...tabs.children].forEach((tab, i) => {
      tab.setAttribute("aria-pressed", String((figures[i - 1] ?? null) === chosen));
    });
  };
  if (figures.length > 1) {
    for (const figure of [null, ...figures]) {
      const tab = document.createElement("button");
      tab.type = "button";
      tab.textContent = figure ? figure.dataset.storey || "no storey" : "all storeys";
      tab.addEventListener("click", () => choose(figure));
      tabs.append(tab);
    }
    tabs.hidden = false;
    choose(null);
  }
  const middle = (link) => {
    const box = link.getBBox();
    return [box.x + box.width / 2, box.y + box.height / 2];
  };
  const ways = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] };
  const nearest = (plan, from, [dx, dy]) => {
    const [x0, y0] = middle(from);
    let best = null;
    let least = Infinity;
    for (const link of plan.querySelectorAll("a")) {
      const [x, y] = middle(link);
      const ahead = (x - x0) * dx + (y - y0) * dy;
      const aside = Math.abs((x - x0) * dy) + Math.abs((y - y0) * dx);
      if (link === from || ahead <= 0.5 || aside > 2 * ahead) continue;
      if (ahead + 2 * aside < least) [best, least] = [link, ahead + 2 * aside];
    }
    return best;
  };
  for (const plan of document.querySelectorAll(".plan")) {
    plan.addEventListener("keydown", (event) => {
      const way = ways[event.key];
      if (!way) return;
      event.preventDefault();
      const at = document.activeElement.closest(".plan a");
      (at ? nearest(plan, at, way) : plan.querySelector("a"))?.focus();
    });
  }

  follow();
})();

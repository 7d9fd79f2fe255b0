import { createPanels } from "./panels.js";
import { cell, duration, share, time } from "./format.js";
import { el, setText } from "./dom.js";

// Follows the worker and shows what it says. The address of the page holds what is chosen.

const find = (id) => document.getElementById(id);
const silence = 45_000;
const marks = {
  holds: "M4 12.5l5 5L20 6.5",
  doubtful: "M12 3.5L22 20.5H2zM12 10v5M12 17.6v.4",
  broken: "M5 5l14 14M19 5L5 19",
  unknown: "M5 12h14",
};

let view = null;
let source = null;
let paused = false;
let retry = 0;
let heard = Date.now();
let spoken = "";
const panels = createPanels((change) => choose(change));

function query() {
  const given = new URLSearchParams(location.search), wanted = new URLSearchParams();
  for (const key of ["window", "slice", "past"]) if (given.get(key)) wanted.set(key, given.get(key));
  const text = wanted.toString();
  return text ? `?${text}` : "";
}

function choose(change) {
  const wanted = new URLSearchParams(location.search);
  for (const [key, value] of Object.entries(change)) value ? wanted.set(key, value) : wanted.delete(key);
  history.pushState(null, "", `${location.pathname}?${wanted}`);
  follow();
}

function setLink(state, text) {
  find("link").dataset.state = state;
  setText(find("link-text"), text);
}

function follow() {
  source?.close();
  source = null;
  clearTimeout(retry);
  if (paused) {
    fetchOnce();
    return;
  }
  source = new EventSource(`/data/events${query()}`);
  source.addEventListener("view", (event) => {
    alive();
    show(JSON.parse(event.data));
  });
  source.addEventListener("beat", alive);
  source.addEventListener("error", lost);
}

function alive() {
  heard = Date.now();
  setLink("live", "Live");
}

// The browser tries again by itself unless it was refused; then somebody has to find out why.
async function lost() {
  setLink("lost", "Connection lost");
  if (source?.readyState !== EventSource.CLOSED) return;
  const isAnswered = await fetchOnce();
  if (isAnswered && !paused) setLink("lost", "Now and then");
  retry = setTimeout(follow, 10_000);
}

async function fetchOnce() {
  try {
    const answer = await fetch(`/data/view${query()}`);
    if (answer.status === 401) location.assign(`/login${query()}`);
    if (!answer.ok) return false;
    show(await answer.json());
    return true;
  } catch {
    return false;
  }
}

function show(next) {
  view = next;
  setText(find("stream"), view.stream);
  setText(find("clock"), view.clock ? `${time(view.clock)} UTC` : "–");
  if (view.clock) find("clock").dateTime = view.clock;
  showVerdict();
  showProgress();
  showChoices();
  showFacts();
  find("notice").hidden = !view.notice;
  setText(find("notice"), view.notice ?? "");
  const shown = new URLSearchParams({ window: view.choice.window, past: view.choice.past });
  if (view.choice.slice) shown.set("slice", view.choice.slice);
  for (const panel of panels) panel.update(view, `?${shown}`);
  find("all-json").href = `/data/view?${shown}`;
  find("main").removeAttribute("aria-busy");
}

function showProgress() {
  const { records, rejected, commits, sourceShare } = view.progress;
  const read = sourceShare === undefined ? "" : sourceShare === 1 ? " All of the source is read." : ` ${share(sourceShare)} of the source is read.`;
  const behind = view.clock ? (Date.now() - Date.parse(view.clock)) / 1000 : 0;
  const lag = behind > 1 ? ` The stream’s clock is ${duration(behind)} behind this device’s.` : "";
  setText(find("progress"), `${cell("count", records)} records taken, ${cell("count", rejected)} of them rejected; ${cell("count", commits)} commits since this worker started.${read}${lag}`);
}

function showVerdict() {
  const { standing, title, sentence } = view.verdict;
  document.title = `${title} – ${view.stream}`;
  find("verdict").dataset.standing = standing;
  find("mark").setAttribute("d", marks[standing]);
  setText(find("verdict-title"), title);
  setText(find("verdict-sentence"), `: ${sentence}`);
  const list = find("findings");
  while (list.children.length > view.findings.length) list.lastChild.remove();
  view.findings.forEach(({ notable, text }, index) => {
    const item = list.children[index] ?? list.appendChild(el("li"));
    item.className = notable ? "notable" : "";
    setText(item, text);
  });
  // Only what changes in kind is read out, not every new number.
  const raised = view.tables.alarms.rows.filter((row) => row[1] === "raised").map((row) => row[0]);
  const news = `${title}. ${raised.length ? `Raised: ${raised.join(", ")}.` : ""}`;
  if (news === spoken) return;
  spoken = news;
  setText(find("announcement"), news);
}

function showFacts() {
  const list = find("facts");
  while (list.children.length > view.facts.length) list.lastChild.remove();
  view.facts.forEach(({ name, value, note }, index) => {
    const item = list.children[index] ?? list.appendChild(el("div", {}, el("dt"), el("dd", { class: "value" }), el("dd", { class: "note" })));
    setText(item.children[0], name);
    setText(item.children[1], value);
    setText(item.children[2], note);
  });
}

function showChoices() {
  showPills("window");
  showPills("past");
  const select = find("slice"), options = view.choices.slice;
  if (document.activeElement !== select || select.options.length !== options.length) {
    const shown = JSON.stringify(options);
    if (select.dataset.shown !== shown) {
      select.dataset.shown = shown;
      select.replaceChildren(...options.map(([value, text]) => el("option", { value }, text)));
    }
    select.value = view.choice.slice;
  }
  select.closest(".field").hidden = options.length < 2;
}

function showPills(name) {
  const box = find(name), options = view.choices[name], shown = JSON.stringify(options);
  if (box.dataset.shown !== shown) {
    box.dataset.shown = shown;
    box.replaceChildren(...options.map(([value, text]) => el("label", {}, el("input", { type: "radio", name, value }), text)));
  }
  for (const input of box.querySelectorAll("input")) input.checked = input.value === view.choice[name];
}

find("choice").addEventListener("change", (event) => choose({ [event.target.name]: event.target.value }));
find("choice").addEventListener("submit", (event) => event.preventDefault());
addEventListener("popstate", follow);
find("pause").addEventListener("click", () => {
  paused = !paused;
  find("pause").setAttribute("aria-pressed", String(paused));
  setText(find("pause"), paused ? "Resume" : "Pause");
  if (paused) {
    source?.close();
    clearTimeout(retry);
    setLink("paused", "Paused");
  } else {
    setLink("waiting", "Connecting");
    follow();
  }
});
setInterval(() => {
  if (!paused && Date.now() - heard > silence) setLink("lost", "No news");
}, 5_000);

// Where there is no key there is no session to end.
fetch("/data/session").then((answer) => answer.json()).then(({ key }) => { find("logout").hidden = !key; }).catch(() => {});
find("sections").replaceChildren(...panels.map((panel) => panel.element));
follow();

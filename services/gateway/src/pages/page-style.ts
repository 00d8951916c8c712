import { FIGURE_STYLE } from "@moorline/figures";

/** One style sheet: type and space carry the page, colour only helps. */
export const PAGE_STYLE = `
:root { color-scheme: light dark; --paper: #fdfcf9; --ink: #20262b; --faint: #5d666d; --band: #cfd8dc; --mark: #0b5c7a; --rule: #d9d6cd; --strong: #8a3a00; }
@media (prefers-color-scheme: dark) { :root { --paper: #14191c; --ink: #e6e9ea; --faint: #9aa5ab; --band: #36434a; --mark: #7cc4de; --rule: #333d43; --strong: #f0b27a; } }
* { box-sizing: border-box; }
body { margin: 0 auto; padding: 1.5rem clamp(0.75rem, 4vw, 3rem) 4rem; max-width: 74rem; background: var(--paper); color: var(--ink);
  font: 1rem/1.5 system-ui, "DejaVu Sans", sans-serif; }
a { color: var(--mark); text-underline-offset: 0.2em; }
a:focus-visible, button:focus-visible, summary:focus-visible, input:focus-visible { outline: 3px solid var(--mark); outline-offset: 2px; }
.skip { position: absolute; left: -99rem; } .skip:focus { left: 1rem; top: 0.5rem; background: var(--paper); padding: 0.3rem 0.6rem; }
header p { margin: 0; color: var(--faint); }
h1 { font-size: 1.7rem; line-height: 1.2; margin: 0.6rem 0 0.2rem; overflow-wrap: anywhere; }
h2 { font-size: 1.15rem; margin: 2rem 0 0.5rem; overflow-wrap: anywhere; }
.notice { border-left: 4px solid var(--strong); padding: 0.2rem 0.8rem; margin: 1rem 0; }
.caution, .faint { color: var(--faint); }
.scroll { overflow-x: auto; }
table { border-collapse: collapse; width: 100%; font-variant-numeric: tabular-nums; }
caption { text-align: left; color: var(--faint); padding: 0.3rem 0; }
th, td { text-align: left; vertical-align: top; padding: 0.45rem 0.9rem 0.45rem 0; border-bottom: 1px solid var(--rule); }
th { font-weight: 600; white-space: nowrap; }
td.number, th.number { text-align: right; white-space: nowrap; }
td.told { min-width: 16rem; }
td.name { overflow-wrap: anywhere; min-width: 9.5rem; max-width: 20rem; }
.state { white-space: nowrap; } .state svg { width: 0.9em; height: 0.9em; vertical-align: -0.05em; margin-right: 0.35em; fill: none; stroke: var(--ink); stroke-width: 2; }
.state-adrift { font-weight: 700; color: var(--strong); } .state-adrift svg { fill: var(--strong); stroke: var(--strong); }
.state-straining { font-weight: 600; } .state-thin, .state-silent { font-style: italic; color: var(--faint); }
.plot { max-width: 46rem; } .plot svg { width: 100%; height: auto; }
.reading { font-size: 1.1rem; max-width: 46rem; }
nav ul { list-style: none; padding: 0; margin: 0.4rem 0; display: flex; flex-wrap: wrap; gap: 0.3rem 1.2rem; }
[aria-current="true"] { font-weight: 700; text-decoration: none; color: var(--ink); }
dl { display: grid; grid-template-columns: max-content 1fr; gap: 0.2rem 1rem; } dt { color: var(--faint); } dd { margin: 0; overflow-wrap: anywhere; }
@media (max-width: 40rem) { dl { grid-template-columns: 1fr; } dd { margin-bottom: 0.5rem; } .wide { display: none; }
  .features, .features caption, .features tbody, .features tr, .features td { display: block; } .features thead { position: absolute; left: -99rem; }
  .features td.wide { display: none; }
  .features tr { border-bottom: 1px solid var(--rule); padding: 0.5rem 0; } .features td { border: 0; padding: 0.1rem 0; text-align: left; }
  .features td[data-label] { display: inline-block; margin-right: 1.2rem; } .features td[data-label]::before { content: attr(data-label) " "; color: var(--faint); } }
@media (prefers-reduced-motion: no-preference) { html { scroll-behavior: smooth; } }
${FIGURE_STYLE}
`;

/** Reloads what is live every few seconds, unless the reader is in the middle of it or has switched it off. */
export const PAGE_SCRIPT = `
const box = document.getElementById("follow");
async function refresh() {
  const live = document.getElementById("live");
  if (!box.checked || document.hidden || live.contains(document.activeElement) || String(getSelection()) !== "") return;
  try {
    const response = await fetch(location.href, { headers: { accept: "text/html" } });
    if (!response.ok) throw new Error(String(response.status));
    const page = new DOMParser().parseFromString(await response.text(), "text/html");
    live.replaceWith(page.getElementById("live"));
    document.getElementById("stale").textContent = "";
  } catch {
    document.getElementById("stale").textContent = "The gateway does not answer: what is shown may be old.";
  }
}
setInterval(refresh, 5000);
`;

/** The tab's mark: the line of equality and a mark that left it. */
export const PAGE_ICON = `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 32 32"><rect width="32" height="32" rx="6" fill="#0b5c7a"/><path d="M5 27 L27 5" stroke="#fdfcf9" stroke-width="2.5"/><path d="M21 13 L27 23 L15 23 Z" transform="translate(-10 -16)" fill="#f0b27a"/></svg>`;

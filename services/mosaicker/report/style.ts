/** The report's style sheet: dark on light, readable on paper, no external font or file. */
export const REPORT_CSS = `
:root {
  color-scheme: light;
  --ink: #1f2a2c; --soft: #4d5a5c; --line: #d9d5ca; --faint: #eeebe2; --paper: #fdfcf9; --card: #ffffff;
  --water: #12565f; --good: #1d6650; --bad: #98291b; --warn-line: #c07a12; --warn-ground: #fdf4df; --warn-ink: #5a3a05;
  --prose: "Iowan Old Style", "Palatino Linotype", Palatino, "URW Palladio L", P052, "DejaVu Serif", serif;
  --plain: Seravek, "Gill Sans Nova", Ubuntu, Calibri, "DejaVu Sans", "Liberation Sans", source-sans-pro, sans-serif;
}
* { box-sizing: border-box; }
html { -webkit-text-size-adjust: 100%; text-size-adjust: 100%; }
body { --ground: var(--paper); margin: 0; background: var(--ground); color: var(--ink); font: 1rem/1.55 var(--plain);
  font-variant-numeric: tabular-nums lining-nums; -webkit-print-color-adjust: exact; print-color-adjust: exact; }
.band { height: 8px; }
.page { max-width: 1220px; margin: 0 auto; padding: 0 clamp(1rem, 3vw, 2.5rem) 4rem; }
.masthead { padding: 2.2rem 0 1.2rem; border-bottom: 1px solid var(--line); }
.kicker { margin: 0 0 .2rem; color: var(--water); font-size: .95rem; letter-spacing: .02em; }
h1, h2, h3 { font-family: var(--prose); font-weight: 600; line-height: 1.2; text-wrap: balance; }
h1 { margin: 0; font-size: clamp(2rem, 5vw, 3.1rem); letter-spacing: -.01em; overflow-wrap: anywhere; }
h2 { margin: 0 0 .6rem; font-size: 1.65rem; }
h3 { margin: 1.8rem 0 .5rem; font-size: 1.15rem; }
.masthead .facts { display: flex; flex-wrap: wrap; gap: .3rem 1.4rem; margin: .7rem 0 0; padding: 0; list-style: none; color: var(--soft); }
p { margin: 0 0 .8rem; max-width: 68ch; text-wrap: pretty; }
a { color: var(--water); text-underline-offset: .18em; }
a:focus-visible, [tabindex]:focus-visible { outline: 3px solid var(--water); outline-offset: 2px; }
.contents { margin: 1rem 0 0; font-size: .92rem; }
.contents ol { display: flex; flex-wrap: wrap; gap: .2rem 1.1rem; margin: 0; padding: 0; list-style: none; }
.contents a { text-decoration: none; }
.contents a:hover { text-decoration: underline; }
section { padding: 2.4rem 0 0; }
.opening { display: grid; gap: 1.6rem 2.4rem; }
.lead { font: 1.3rem/1.5 var(--prose); max-width: 54ch; }
.figures { display: grid; grid-template-columns: repeat(auto-fit, minmax(14rem, 1fr)); gap: 1.1rem 1.6rem; margin: 1.3rem 0 0; }
.figures div { display: flex; flex-direction: column-reverse; justify-content: flex-end; border-top: 3px solid var(--water); padding-top: .45rem; }
.figures dt { color: var(--soft); font-size: .88rem; line-height: 1.3; }
.figures dd { margin: 0; font: 600 1.55rem/1.25 var(--prose); }
.caution { background: var(--warn-ground); border: 1px solid var(--warn-line); border-left-width: 6px; color: var(--warn-ink);
  padding: 1rem 1.2rem; align-self: start; break-inside: avoid; }
.caution h2, .caution h3 { margin: 0 0 .4rem; font-size: 1.12rem; }
.caution p:last-child { margin-bottom: 0; }
.caution.small { padding: .8rem 1.1rem; margin: 0; font-size: .92rem; }
.notice { border-left: 6px solid var(--bad); background: #fbeeea; padding: .8rem 1.1rem; margin: 1rem 0; max-width: 80ch; }
.notice p:last-child { margin: 0; }
.pass { color: var(--good); font-weight: 600; white-space: nowrap; }
.fail { color: var(--bad); font-weight: 700; white-space: nowrap; }
.none { color: var(--soft); }
.note { color: var(--soft); font-size: .92rem; }
.scroll { overflow-x: auto; margin: .6rem 0 1.4rem; }
table { border-collapse: collapse; width: 100%; font-size: .92rem; line-height: 1.35; }
caption { text-align: left; padding: 0 0 .5rem; color: var(--soft); font-size: .92rem; caption-side: top; }
caption span, th[colspan] > span { display: inline-block; position: sticky; left: 0; max-width: min(90ch, calc(100vw - 2.4rem)); }
.card caption span { max-width: none; }
th, td { padding: .42rem .9rem .42rem 0; border-bottom: 1px solid var(--faint); text-align: left; vertical-align: baseline; }
thead th { border-bottom: 2px solid var(--ink); font-weight: 600; vertical-align: bottom; line-height: 1.25; }
thead th small { display: block; }
thead th small, .unit { color: var(--soft); font-weight: 400; font-size: .88em; }
tbody th { font-weight: 500; }
tbody.group th[colspan] { padding-top: 1.1rem; font-weight: 600; border-bottom-color: var(--line); }
tbody.group th[colspan] small { display: block; max-width: 78ch; font-weight: 400; color: var(--soft); font-size: .95em; }
tr.total th, tr.total td { border-top: 2px solid var(--ink); font-weight: 600; }
.num { text-align: right; white-space: nowrap; }
thead th.num { white-space: normal; }
td:has(> svg) { vertical-align: middle; }
.when, .code { white-space: nowrap; }
sup { line-height: 0; font-size: .75em; }
.name { overflow-wrap: anywhere; min-width: 8rem; max-width: 26rem; }
.long { min-width: 16rem; max-width: 34rem; overflow-wrap: anywhere; }
.mono { font-family: "DejaVu Sans Mono", "Liberation Mono", Menlo, Consolas, monospace; font-size: .86em; }
p.mono { overflow-wrap: anywhere; }
svg { display: block; }
svg text { font-family: var(--plain); fill: var(--ink); }
.meter { width: 7.5rem; height: .8rem; min-width: 5rem; }
.strip { width: 15rem; height: 1.3rem; }
.axis { width: 15rem; height: 1.5rem; }
.maps { display: grid; align-items: start; gap: 2rem 2.2rem; grid-template-columns: repeat(auto-fill, minmax(min(100%, 16rem), 1fr)); margin-top: 1rem; }
.maps.few { grid-template-columns: repeat(auto-fill, minmax(min(100%, 28rem), 1fr)); }
.maps.small { grid-template-columns: repeat(auto-fill, minmax(min(100%, 10.5rem), 1fr)); gap: 1.3rem 1.2rem; }
figure { margin: 0; break-inside: avoid; min-width: 0; }
figure .frame { background: var(--card); border: 1px solid var(--line); padding: .5rem; }
figure .frame svg { width: 100%; height: auto; }
figcaption { margin-top: .5rem; font-size: .92rem; line-height: 1.4; }
figcaption strong { display: block; font: 600 1.05rem/1.3 var(--prose); }
.maps.small figcaption { font-size: .86rem; }
.maps.small figcaption strong { font-size: .98rem; }
.legend { margin: .5rem 0 0; }
.legend > svg { width: 100%; height: auto; max-width: 26rem; }
.key { display: flex; flex-wrap: wrap; gap: .2rem 1.1rem; margin: .3rem 0 0; padding: 0; list-style: none; font-size: .86rem; color: var(--soft); }
.key li { display: flex; align-items: center; gap: .4rem; }
.key svg { flex: none; width: 1.4rem; height: .9rem; }
.cards { display: grid; align-items: start; gap: 1.4rem; grid-template-columns: repeat(auto-fill, minmax(min(100%, 30rem), 1fr)); margin-top: 1rem; }
.card { --ground: var(--card); background: var(--ground); border: 1px solid var(--line); padding: 1rem 1.2rem; break-inside: avoid; min-width: 0; }
.card h3 { margin: 0 0 .2rem; overflow-wrap: anywhere; }
.card .chart { width: 100%; max-width: 30rem; height: auto; margin: .5rem 0; }
.card dl { display: grid; grid-template-columns: max-content 1fr; gap: .1rem .9rem; margin: .4rem 0 .8rem; font-size: .92rem; }
.card dt { color: var(--soft); }
.card dd { margin: 0; overflow-wrap: anywhere; }
.card .scroll { margin-bottom: 0; }
.card ul { margin: .6rem 0 0; padding-left: 1.1rem; font-size: .88rem; color: var(--soft); }
details { margin: .6rem 0; }
summary { cursor: pointer; color: var(--water); font-weight: 600; padding: .3rem 0; }
footer { margin-top: 3rem; padding-top: 1rem; border-top: 1px solid var(--line); color: var(--soft); font-size: .88rem; }
@media (min-width: 60rem) { .opening { grid-template-columns: minmax(0, 1.75fr) minmax(17rem, 1fr); } }
@media (max-width: 40rem) {
  .lead { font-size: 1.12rem; }
  h2 { font-size: 1.4rem; }
  .figures { grid-template-columns: repeat(auto-fit, minmax(9rem, 1fr)); }
  .figures dd { font-size: 1.3rem; }
  th, td { padding-right: .55rem; }
  .card { padding: .8rem .9rem; }
  .card dd .mono { font-size: .74em; }
  tbody:not(.group) > tr > th { position: sticky; left: 0; background: var(--ground); box-shadow: 1px 0 0 var(--faint); }
  .name { min-width: 6.5rem; }
}
@media print {
  body { font-size: 9.5pt; background: #fff; }
  .page { max-width: none; padding: 0; }
  .contents { display: none; }
  a { color: inherit; text-decoration: none; }
  .scroll { overflow: visible; }
  section { padding-top: 1.4rem; }
  h2, h3, caption { break-after: avoid; }
  tr { break-inside: avoid; }
  thead { display: table-header-group; }
  .maps { grid-template-columns: repeat(2, 1fr); gap: 1rem; }
  .maps.small { grid-template-columns: repeat(4, 1fr); }
  .cards { grid-template-columns: repeat(2, 1fr); }
  details::details-content { content-visibility: visible; block-size: auto; }
  summary { list-style: none; color: inherit; }
}
`;

// wend/lab/page_style.hpp - how the review page looks: light and dark, narrow and wide, and on paper.
#pragma once

namespace wend::inline v0::lab::detail {

// No rule may rely on colour alone: runs have dashes, cells a hatching, verdicts a shape and a word.
inline constexpr char const* page_style = R"css(
:root { color-scheme: light dark; --paper: #fdfcf8; --card: #f6f3ea; --ink: #24231f; --soft: #635e52; --rule: #d8d2c2;
  --proved: #cfe5de; --hatch: #cfa66d; --between: #f8efdc; --blocked: #5b5a57; --disc: #cfc9ba; --edge: #7d7766;
  --yes: #1d6b52; --no: #9a2f17; --open: #7a5a10; --warn: #f7e6c8; --focus: #1f3c88;
  --p0: #8c2d19; --p1: #b06a00; --p2: #23706e; --p3: #1f3c88; --p4: #6b4c9a; --p5: #444444; }
@media (prefers-color-scheme: dark) { :root { --paper: #171917; --card: #20231f; --ink: #e9e5da; --soft: #aaa592;
  --rule: #3b3e37; --proved: #1f4a40; --hatch: #8a6a3a; --between: #33291a; --blocked: #8e8b82; --disc: #57534a;
  --edge: #a39d8c; --yes: #74cfae; --no: #f0937a; --open: #e2bd62; --warn: #3d3119; --focus: #9db8ff;
  --p0: #f0937a; --p1: #e8b04b; --p2: #6fcfc6; --p3: #a3b8ff; --p4: #c9aef0; --p5: #c8c8c8; } }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 76rem; padding: 1rem 1rem 4rem; background: var(--paper); color: var(--ink);
  font: 1rem/1.5 system-ui, sans-serif; overflow-wrap: break-word; }
h1 { font-size: 1.6rem; line-height: 1.2; margin: 0.2rem 0; }
h2 { font-size: 1.25rem; margin: 2.4rem 0 0.6rem; border-bottom: 2px solid var(--rule); padding-bottom: 0.2rem; }
h3 { font-size: 1.05rem; margin: 1.2rem 0 0.4rem; }
p { max-width: 46rem; margin: 0.4rem 0; }
a { color: inherit; }
.small, figcaption, caption { color: var(--soft); font-size: 0.88rem; text-align: left; }
.caution { background: var(--warn); border-left: 0.4rem solid var(--open); padding: 0.6rem 0.8rem; margin: 0.8rem 0;
  max-width: 52rem; }
nav ul { list-style: none; padding: 0; display: flex; flex-wrap: wrap; gap: 0.2rem 1.2rem; margin: 0.6rem 0; }
table { border-collapse: collapse; width: 100%; margin: 0.4rem 0; font-size: 0.95rem; }
th, td { text-align: left; vertical-align: top; padding: 0.3rem 0.7rem 0.3rem 0; border-bottom: 1px solid var(--rule); }
thead th.number { white-space: normal; }
thead th { color: var(--soft); vertical-align: bottom; font-weight: 600; font-size: 0.85rem; }
td.number, th.number { text-align: right; white-space: nowrap; font-variant-numeric: tabular-nums; }
.holds-yes { color: var(--yes); } .holds-no { color: var(--no); } .holds-open { color: var(--open); }
.verdict { white-space: nowrap; font-weight: 600; }
.verdict svg { width: 0.8em; height: 0.8em; margin-right: 0.35em; fill: currentColor; stroke: currentColor; }
figure { margin: 0.6rem 0; }
svg text { font: 13px system-ui, sans-serif; fill: var(--soft); }
.chart text { font-size: 18px; }
.map, .chart { display: block; width: 100%; height: auto; }
.map .sheet { fill: var(--paper); } .map .proved { fill: var(--proved); } .map .between { fill: var(--between); }
.map .hatch { fill: var(--hatch); } .map .blocked { fill: var(--blocked); }
.map .axes { stroke: var(--rule); } .map .discs { fill: var(--disc); stroke: var(--edge); }
.map .run .ends * { stroke: var(--ink); stroke-width: 2; }
.map .run polyline { fill: none; stroke: var(--p3); stroke-width: 2.2; stroke-dasharray: none; }
.map .run g { fill: var(--p3); } .map .run path { stroke: var(--no); stroke-width: 3; fill: none; }
.robot circle { fill: var(--paper); fill-opacity: 0.75; stroke: var(--ink); stroke-width: 2; }
.robot line { stroke: var(--ink); stroke-width: 2.5; }
.chart .grid { stroke: var(--rule); } .chart .trace { fill: none; stroke: var(--p3); stroke-width: 2; }
.chart .off { fill: var(--card); stroke: var(--rule); } .chart .on { fill: var(--p3); }
.chart .cursor { stroke: var(--no); stroke-width: 1.5; visibility: hidden; }
.shares { fill: none; stroke-width: 2.4; }
.p0 { stroke: var(--p0); stroke-dasharray: 2 4; } .p1 { stroke: var(--p1); stroke-dasharray: 9 4; }
.p2 { stroke: var(--p2); stroke-dasharray: 12 3 2 3; } .p3 { stroke: var(--p3); }
.p4 { stroke: var(--p4); stroke-dasharray: 5 3; } .p5 { stroke: var(--p5); stroke-dasharray: 1 3; }
.key { display: flex; flex-wrap: wrap; gap: 0.2rem 1.2rem; list-style: none; padding: 0; margin: 0.4rem 0;
  font-size: 0.9rem; }
.key svg { width: 3rem; height: 1rem; vertical-align: -0.15rem; margin-right: 0.4rem; }
.key svg rect { stroke: var(--edge); } .key .proved { fill: var(--proved); } .key .between { fill: var(--between); }
.key .hatch { stroke: var(--hatch); stroke-width: 2; } .key .blocked { fill: var(--blocked); }
.charts { display: grid; gap: 0.6rem 1.6rem; grid-template-columns: repeat(auto-fit, minmax(min(100%, 26rem), 1fr)); }
.policy-body { display: grid; gap: 0.6rem 2rem; }
.policy-body > * { min-width: 0; }
.controls { display: none; flex-wrap: wrap; gap: 0.5rem 0.9rem; align-items: center; margin: 0.5rem 0; }
.controls label { display: flex; gap: 0.4rem; align-items: center; }
.controls input[type=range] { flex: 1 1 12rem; min-width: 0; width: 100%; accent-color: var(--p3); }
.controls .along { flex: 1 1 16rem; }
.controls output { flex: 1 1 100%; font-variant-numeric: tabular-nums; min-height: 1.5em; }
button, select { font: inherit; color: inherit; background: var(--card); border: 1px solid var(--edge);
  border-radius: 0.25rem; padding: 0.25rem 0.7rem; max-width: 100%; }
fieldset.choice { display: none; flex-wrap: wrap; gap: 0.3rem 1.2rem; border: 1px solid var(--rule); margin: 0.6rem 0;
  padding: 0.3rem 0.8rem 0.5rem; min-width: 0; }
.scripted fieldset.choice, .scripted .controls { display: flex; }
.scripted .chart .cursor { visibility: visible; }
button.show { display: none; } .scripted button.show { display: inline-block; }
:focus-visible { outline: 3px solid var(--focus); outline-offset: 2px; }
pre { background: var(--card); padding: 0.6rem 0.8rem; overflow-x: auto; max-width: 100%; font-size: 0.88rem; }
@media (min-width: 60rem) { .policy-body { grid-template-columns: minmax(0, 3fr) minmax(0, 2fr); } }
@media (max-width: 44rem) {
  svg text, .chart text { font-size: 21px; }
  thead { position: absolute; left: -100rem; }
  table, caption, tbody, tr, td, tbody th { display: block; width: 100%; border: 0; padding: 0.05rem 0; }
  tr { border-bottom: 1px solid var(--rule); padding: 0.4rem 0; }
  td[data-label] { display: grid; grid-template-columns: 9.5rem minmax(0, 1fr); gap: 0.6rem; }
  td[data-label]::before { content: attr(data-label); color: var(--soft); font-size: 0.88rem; }
  td.number { text-align: left; white-space: normal; }
  .verdict { white-space: normal; }
}
@media print {
  :root { --paper: #ffffff; --card: #ffffff; --ink: #000000; --soft: #444444; --warn: #ffffff; }
  body { max-width: none; padding: 0; font-size: 10pt; }
  nav, .controls, fieldset.choice, button.show { display: none !important; }
  section.policy[hidden] { display: block !important; }
  .robot, .chart .cursor { visibility: hidden; }
  section.policy, figure, tr { break-inside: avoid; }
  .map { max-height: 14cm; }
}
)css";

}  // namespace wend::inline v0::lab::detail

"""The look of the page: one column of text, quiet tables, figures as wide as a journal column."""

from __future__ import annotations

__all__ = ["STYLE"]

STYLE = """\
:root { color-scheme: light; --ink: #1a1a1a; --soft: #5a5a5a; --rule: #c9c9c4; --accent: #00547f;
  --wash: #f5f4f0; }
* { box-sizing: border-box; }
html { background: #fff; }
body { margin: 0 auto; max-width: 62rem; padding: 1.5rem 1.25rem 3rem; background: #fff;
  color: var(--ink); font: 1rem/1.5 Georgia, "Times New Roman", "DejaVu Serif", serif;
  overflow-wrap: break-word; }
h1, h2, h3, nav, table, figcaption, dl, .about, .under, .skip { font-family: "Helvetica Neue",
  Arial, "Liberation Sans", "DejaVu Sans", sans-serif; }
h1 { font-size: 1.5rem; line-height: 1.2; margin: 0 0 .25rem; }
h2 { font-size: 1.15rem; margin: 2.4rem 0 .7rem; padding-top: .5rem;
  border-top: 2px solid var(--ink); }
h3 { font-size: .92rem; margin: 1.3rem 0 .35rem; }
p, ul, blockquote { max-width: 44rem; }
p { margin: .5rem 0; }
a { color: var(--accent); }
.skip { position: absolute; left: -999rem; }
.skip:focus { left: 1rem; top: .5rem; background: #fff; padding: .3rem; }
.about, .under { color: var(--soft); font-size: .82rem; margin: .3rem 0; }
nav ol { margin: .8rem 0 0; padding: 0; list-style: none; font-size: .85rem; display: flex;
  flex-wrap: wrap; gap: .2rem 1rem; }
.lead { font-size: 1.22rem; line-height: 1.45; }
.note { border-left: 4px solid var(--ink); padding-left: .8rem; font-weight: bold; }
.facts { display: grid; grid-template-columns: repeat(auto-fit, minmax(9.5rem, 1fr)); gap: .6rem;
  margin: 1rem 0; }
.facts div { background: var(--wash); padding: .6rem .7rem; min-width: 0; }
.facts dt { font-size: .78rem; color: var(--soft); }
.facts dd { margin: 0; }
.facts b { display: block; font-size: 1.45rem; line-height: 1.25;
  font-variant-numeric: tabular-nums; }
.facts span { font-size: .78rem; color: var(--soft); }
.table, figure { display: inline-block; vertical-align: top; margin: .9rem 1.6rem .5rem 0;
  max-width: calc(100% - 1.6rem); }
.table.long { display: block; }
.scroll { overflow-x: auto; }
.table .under { width: 0; min-width: 100%; }
.scroll:focus-visible, a:focus-visible { outline: 2px solid var(--accent); outline-offset: 2px; }
table { border-collapse: collapse; font-size: .84rem; line-height: 1.35;
  font-variant-numeric: tabular-nums; }
caption { text-align: left; font-weight: bold; padding-bottom: .35rem; }
th, td { padding: .22rem .9rem .22rem 0; vertical-align: top; text-align: left; min-width: 3rem;
  overflow-wrap: anywhere; }
th.n, td.n { text-align: right; white-space: nowrap; overflow-wrap: normal; }
thead th.n { white-space: normal; min-width: 4.2rem; }
td:not(.n) { min-width: 8rem; }
thead th { border-bottom: 1px solid var(--ink); vertical-align: bottom; font-weight: normal;
  color: var(--soft); overflow-wrap: normal; }
tbody th { font-weight: normal; min-width: 8rem; max-width: 22rem; }
tbody tr { border-bottom: 1px solid #e9e8e3; }
tr.strong th, tr.strong td { font-weight: bold; background: var(--wash); }
ul { padding-left: 1.1rem; margin: .3rem 0; font-size: .92rem; }
#methods ul { font-size: .8rem; max-width: none; columns: 24rem; column-gap: 2rem; }
#evidence ul { max-width: none; }
blockquote { margin: .3rem 0; padding: .1rem 0 .1rem .9rem; border-left: 3px solid var(--rule); }
figure { width: 28rem; break-inside: avoid; }
figure svg { display: block; width: 100%; height: auto; }
figcaption { font-size: .8rem; color: var(--soft); margin-top: .3rem; }
@media (max-width: 40rem) {
  .table, figure { margin-right: 0; max-width: 100%; }
  caption span { display: inline-block; max-width: calc(100vw - 3.5rem); }
}
@media print {
  @page { size: A4; margin: 13mm; }
  body { max-width: none; padding: 0; font-size: 8.6pt; line-height: 1.3; }
  nav, .skip { display: none; }
  h1 { font-size: 14pt; } h2 { font-size: 11pt; margin: 12pt 0 4pt; break-after: avoid; }
  h3 { font-size: 9pt; margin: 6pt 0 2pt; break-after: avoid; }
  p, ul, blockquote { max-width: none; } p { margin: 3pt 0; }
  .lead { font-size: 11pt; } .facts { margin: 5pt 0; gap: 4pt; } .facts b { font-size: 12pt; }
  .facts { grid-template-columns: repeat(5, 1fr); } .facts div { padding: 3pt 5pt; }
  table { font-size: 7.2pt; line-height: 1.2; } caption { break-after: avoid; }
  th, td, td:not(.n) { padding: 1pt 6pt 1pt 0; min-width: 0; }
  thead { display: table-header-group; }
  thead th.n { min-width: 0; max-width: 15mm; } tbody th { min-width: 0; max-width: 62mm; }
  tr { break-inside: avoid; } .scroll { overflow: visible; }
  .table, figure { margin: 4pt 4mm 2pt 0; max-width: calc(100% - 4mm); } figure { width: 80mm; }
  .under, figcaption, .about { font-size: 7.2pt; } ul { font-size: 8pt; }
  #methods ul { font-size: 6.6pt; columns: 3; column-gap: 5mm;
    line-height: 1.2; } #evidence ul { font-size: 7.2pt;
    columns: 2; column-gap: 6mm; }
  a { color: inherit; text-decoration: none; }
}
"""

/** The house style for the documentation: warm paper, ink, ruled lines. Every pair meets 4.5:1. */
export const DOCS_STYLE = `
@font-face { font-family: 'Atkinson Hyperlegible'; font-weight: 400; src: url('fonts/text-400.woff2') format('woff2'); }
@font-face { font-family: 'Atkinson Hyperlegible'; font-weight: 700; src: url('fonts/text-700.woff2') format('woff2'); }
@font-face { font-family: 'Roboto Mono'; font-weight: 400; src: url('fonts/code-400.woff2') format('woff2'); }
:root { color-scheme: light dark; --paper: #faf6ec; --ink: #26231d; --quiet: #5c5648; --rule: #cfc6b0; --teal: #0b5358; --slip: #f2ecdc; }
@media (prefers-color-scheme: dark) {
  :root { --paper: #1d1b17; --ink: #ece5d5; --quiet: #b9b09c; --rule: #4a4539; --teal: #83c9cd; --slip: #27241e; }
}
* { box-sizing: border-box; }
body { margin: 0; background: var(--paper); color: var(--ink); font: 400 1rem/1.55 'Atkinson Hyperlegible', sans-serif; }
main, header, nav { max-width: 60rem; margin: 0 auto; padding: 0 1.25rem; }
header { padding-top: 2.5rem; }
h1 { font-size: 1.9rem; margin: 0 0 .5rem; }
h2 { margin: 3rem 0 0; padding-bottom: .3rem; border-bottom: 3px double var(--rule); font-size: 1.4rem; }
h3 { margin: 0; font: 400 1.05rem/1.4 'Roboto Mono', monospace; overflow-wrap: anywhere; }
h4 { margin: 1rem 0 .3rem; font-size: 1rem; }
article { padding: 1.5rem 0; border-bottom: 1px solid var(--rule); }
p { margin: .5rem 0; max-width: 44rem; }
a { color: var(--teal); text-underline-offset: .15em; }
a:focus-visible, pre:focus-visible, .wide:focus-visible, summary:focus-visible { outline: 3px solid var(--teal); outline-offset: 2px; }
nav ul { columns: 2 20rem; padding-left: 0; list-style: none; }
nav li { padding: .2rem 0; break-inside: avoid; }
nav a { display: inline-block; min-height: 1.5rem; overflow-wrap: anywhere; }
code, pre { font: 400 .875rem/1.5 'Roboto Mono', monospace; }
pre { background: var(--slip); border: 1px solid var(--rule); padding: .75rem 1rem; overflow-x: auto; }
.wide { overflow-x: auto; }
table { border-collapse: collapse; width: 100%; }
th, td { text-align: left; vertical-align: top; padding: .35rem .75rem .35rem 0; border-bottom: 1px solid var(--rule); }
th { font-weight: 700; }
td:first-child code { white-space: nowrap; }
.quiet { color: var(--quiet); }
summary { cursor: pointer; min-height: 1.5rem; }
@media print { pre { white-space: pre-wrap; } }
`;

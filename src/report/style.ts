import { Html } from './html.js';

/**
 * The report's own look: paper and ink, one colour for what can be acted on, maps always on light ground so that their
 * colours mean the same by night. Contrast of text is at least 4.5 to 1 (WCAG 2.2, success criterion 1.4.3).
 */
export const STYLE = new Html(`
:root{--paper:#fbfaf6;--panel:#ffffff;--ink:#1d2529;--soft:#566066;--line:#d9d6cb;--hair:#e9e6dc;--mark:#0f5c5c;--warn:#8a3d0a;--warnpale:#fbf0e4;color-scheme:light dark}
@media (prefers-color-scheme:dark){:root{--paper:#15191b;--panel:#1c2225;--ink:#e6e4dc;--soft:#a5aeb1;--line:#3a4347;--hair:#2a3235;--mark:#7fcdc4;--warn:#f0b27a;--warnpale:#33261a}}
*{box-sizing:border-box}
html{-webkit-text-size-adjust:100%}
body{margin:0;background:var(--paper);color:var(--ink);font:16px/1.55 "Source Sans 3","Segoe UI",system-ui,"Helvetica Neue",Arial,sans-serif}
header,main{max-width:1040px;margin:0 auto;padding:0 28px}
header{padding-top:48px}
main{padding-bottom:72px}
h1,h2{font-family:"Iowan Old Style","Palatino Linotype",Palatino,"URW Palladio L",Georgia,serif;font-weight:600;line-height:1.2;text-wrap:balance}
h1{font-size:2.3rem;margin:.1em 0 .6em}
h2{font-size:1.5rem;margin:2.4em 0 .6em;padding-top:.55em;border-top:2px solid var(--ink)}
h3{font-size:1.02rem;margin:1.7em 0 .5em;display:flex;align-items:center;gap:.5em}
h3 .count{font-weight:400;color:var(--soft)}
p{margin:.7em 0;max-width:74ch}
.kind{margin:0;color:var(--mark);font-weight:600;letter-spacing:.02em}
.lead{font-size:1.2rem;line-height:1.5}
a{color:var(--mark);text-underline-offset:.15em}
small{font-weight:400;color:var(--soft);font-size:.86em}
code{font:.9em ui-monospace,"SF Mono",Consolas,monospace}
q{quotes:"“" "”"}
.facts{display:grid;grid-template-columns:repeat(auto-fit,minmax(210px,1fr));gap:.2em 2.2em;margin:0 0 1.2em;padding:0}
.facts dt{color:var(--soft);font-size:.86em}
.facts dd{margin:0}
nav ul{max-width:none;list-style:none;display:flex;flex-wrap:wrap;gap:.25em 1.3em;margin:0;padding:.8em 0;border-top:1px solid var(--line);border-bottom:1px solid var(--line)}
.note{border-left:3px solid var(--line);padding-left:1em}
.tally{max-width:none;list-style:none;display:grid;grid-template-columns:repeat(auto-fit,minmax(138px,1fr));gap:10px;margin:1.4em 0;padding:0}
.tally li{display:flex;align-items:center;gap:.6em;background:var(--panel);border:1px solid var(--line);border-radius:6px;padding:.5em .8em;line-height:1.25}
.tally b{display:block;font:600 1.5rem/1.1 "Iowan Old Style","Palatino Linotype",Palatino,Georgia,serif}
.tally .none{color:var(--soft)}
.sign{width:1.05em;height:1.05em;flex:none;vertical-align:-.15em;overflow:visible}
.sign .stroke{fill:none;stroke:currentColor;stroke-width:1.7}
.sign .dashed{stroke-dasharray:2.6 2.2}
.is-located .sign,.is-unrecorded .sign{color:var(--mark)}
.is-unplaced:not(.none) .sign{color:var(--warn)}
.told{margin:0}
.told>div{display:grid;grid-template-columns:minmax(7.5em,max-content) 1fr;gap:.2em 1.2em;padding:.55em 0;border-top:1px solid var(--hair)}
.told dt{font-weight:600;overflow-wrap:anywhere}
.told dd{margin:0;max-width:74ch}
.place{white-space:nowrap}
.notes{color:var(--soft);padding-left:1.2em}
.none{color:var(--soft)}
ul{max-width:78ch}
li{margin:.3em 0}
.scroll{overflow-x:auto}
.scroll+.scroll{margin-top:2em}
figure{margin:1.4em 0 2em}
figcaption{color:var(--soft);font-size:.92em;max-width:80ch;margin-top:.5em}
.map svg{display:block;width:100%;min-width:620px;height:auto;background:#fff;border:1px solid var(--line);border-radius:6px;font:12px "Source Sans 3","Segoe UI",system-ui,"Helvetica Neue",Arial,sans-serif}
.map .ground{fill:#f4f2ec}
.map .neat{fill:none;stroke:#1d2529;stroke-width:1.2}
.map .graticule{fill:none;stroke:#1d2529;stroke-opacity:.13;stroke-width:.7}
.map .tick{fill:none}
.map .tick,.map .bar{stroke:#1d2529;stroke-width:.9}
.map .axis,.map .key{fill:#1d2529}
.map .axis{font-size:11px;font-variant-numeric:tabular-nums}
.map .middle{text-anchor:middle}
.map .end{text-anchor:end}
.map .strong{font-weight:600}
.map .faint{fill:#566066}
.map .walked{fill:none;stroke:#1d2529;stroke-opacity:.33;stroke-width:.8;stroke-linejoin:round}
.map .parcel{fill:none;stroke:#1d2529;stroke-width:2;stroke-linejoin:round}
.map .exclusion{fill-rule:evenodd;stroke:#566066;stroke-width:1}
.map g>.exclusion:not([fill]){fill:#fff}
.map .hatch{fill:none;stroke:#566066;stroke-width:1.1}
.map .outline{fill:none;stroke:#1d2529;stroke-width:1.1;stroke-dasharray:1.5 2.2}
.map .ellipse{fill:none;stroke:#6a1b7a;stroke-width:1.5;stroke-dasharray:7 3.5}
.map .ellipse-halo{fill:none;stroke:#fff;stroke-opacity:.75;stroke-width:3.4}
.mark{fill:currentColor;stroke:none}
.hole{fill:var(--panel)}
.open{fill:none;stroke:currentColor;stroke-width:1.9;stroke-linejoin:round}
.map .mark{fill:#12181b;stroke:#fff;stroke-width:1.4;paint-order:stroke}
.map .hole{fill:#fff}
.map .open{fill:#fff;stroke:#12181b;stroke-width:1.9}
.map .record-ring{fill:#fff;fill-opacity:.65;stroke:#6a1b7a;stroke-width:1.6}
.map .record-cross{fill:none;stroke:#6a1b7a;stroke-width:1.6}
.map .label{font-size:12px;font-weight:600;fill:#12181b;stroke:#fff;stroke-width:3.2;stroke-linejoin:round;paint-order:stroke}
.map .label.record{fill:#6a1b7a;font-weight:500}
.map .leader{stroke:#12181b;stroke-width:.8}
.map .scale{fill:#fff;stroke:#12181b;stroke-width:1}
.map .scale.full{fill:#12181b}
.map .north{fill:none;stroke:#12181b;stroke-width:1.1}
.map .north.strong{stroke-width:1.9}
.map .north.star{fill:#12181b;stroke:none}
table{border-collapse:collapse;width:100%;font-size:.92rem;line-height:1.4;font-variant-numeric:tabular-nums}
caption{text-align:left;color:var(--soft);font-size:1em;padding-bottom:.7em;max-width:84ch}
th,td{padding:.45em .8em .45em 0;vertical-align:top;border-bottom:1px solid var(--hair)}
thead th{border-bottom:1.5px solid var(--ink);vertical-align:bottom;font-weight:600}
tbody th{font-weight:600}
.txt{text-align:left}
.num{text-align:right;white-space:nowrap}
.word{white-space:nowrap}
.meaning{display:grid;grid-template-columns:repeat(auto-fit,minmax(280px,1fr));gap:.3em 2em;font-size:.9em;color:var(--soft)}
.meaning div{display:flex;gap:.6em}
.meaning dt{font-weight:600;color:var(--ink);white-space:nowrap}
.meaning dd{margin:0}
.cautions{background:var(--warnpale);border-left:5px solid var(--warn);border-radius:0 6px 6px 0;padding:.2em 1.4em 1em;margin-top:2.6em}
.cautions h2{border:0;margin-top:.7em;padding-top:0;color:var(--warn)}
.sources{font-size:.93em}
@media (max-width:640px){header,main{padding-left:16px;padding-right:16px}.told>div{grid-template-columns:1fr}h1{font-size:1.8rem}}
@media print{
@page{margin:15mm}
:root{--paper:#fff;--panel:#fff;--ink:#000;--soft:#444;--line:#bbb;--hair:#ddd;--mark:#0f5c5c;--warn:#7a3408;--warnpale:#fbf3ea}
body{font-size:10pt}
header,main{max-width:none;padding:0}
nav{display:none}
h2,h3,caption{break-after:avoid}
tr,figure,.told>div,.tally li,.cautions li{break-inside:avoid}
.scroll{overflow:visible}
.map svg{min-width:0}
table{font-size:8pt}
*{-webkit-print-color-adjust:exact;print-color-adjust:exact}
}
`.trim());

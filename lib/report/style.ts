/**
 * The look of a page: one column, quiet, made to be read on paper as well. The accents are blue and
 * vermilion of M. Okabe & K. Ito's set for all colour visions (2008, from memory); every mark also differs by form.
 */
export const STYLE = `
:root{--ink:#1f2a33;--soft:#55626d;--rule:#d4dae0;--wash:#f4f6f8;--blue:#0b5d94;--band:#74aed1;--verm:#b8480b;--strip:#fae3d5;--alert:#7a4a00;--alertwash:#fdf4e0;--fail:#8c1c13}
*{box-sizing:border-box}
html{-webkit-text-size-adjust:100%}
body{margin:0 auto;padding:36px 24px 72px;max-width:908px;color:var(--ink);background:#fff;font:16px/1.5 "Source Sans 3","Noto Sans","Segoe UI","Helvetica Neue","Liberation Sans",Arial,sans-serif}
h1{font-size:30px;line-height:1.2;margin:2px 0 6px;font-weight:600;overflow-wrap:anywhere}
h2{font-size:21px;line-height:1.3;margin:44px 0 10px;padding-top:10px;border-top:2px solid var(--ink);font-weight:600}
h3{font-size:17px;margin:24px 0 6px;font-weight:600;overflow-wrap:anywhere}
p{margin:6px 0 10px;max-width:80ch;overflow-wrap:anywhere}
a{color:var(--blue)}
.over{color:var(--soft);font-size:14px;margin:0}
.lede{font-size:17px}
.small{font-size:14px;color:var(--soft)}
figure{margin:14px 0 10px}
figcaption{font-size:14px;color:var(--soft);max-width:84ch}
svg,img{max-width:100%;height:auto;display:block}
table{border-collapse:collapse;width:100%;font-size:14.5px;font-variant-numeric:tabular-nums}
th{text-align:left;font-weight:600;vertical-align:bottom;padding:4px 14px 5px 0;border-bottom:1.5px solid var(--ink)}
td{padding:4px 14px 4px 0;border-bottom:1px solid var(--rule);vertical-align:top;overflow-wrap:anywhere}
th.n,td.n{text-align:right;overflow-wrap:normal}
td.n,td.s,.o{white-space:nowrap}
td.s{padding-right:0}
th span{font-weight:400;color:var(--soft);white-space:nowrap}
td.w{width:192px;padding-top:3px;padding-bottom:0}
tr.group td{border-bottom:1px solid var(--soft);padding-top:14px;font-weight:600}
dl{display:grid;grid-template-columns:max-content 1fr;gap:3px 18px;margin:8px 0;font-size:15px}
dt{color:var(--soft)}
dd{margin:0;overflow-wrap:anywhere}
ul.plain{list-style:none;margin:6px 0;padding:0}
ul.plain li{margin:0 0 8px;padding-left:14px;border-left:3px solid var(--rule);max-width:84ch;overflow-wrap:anywhere}
ul.plain li.doubt{border-left-color:#d08a00}
ul.plain li.fail{border-left-color:var(--fail)}
.warn{border:1.5px solid var(--ink);padding:10px 16px;margin:18px 0;background:#fff}
.warn p{margin:5px 0}
.bar{border-left:5px solid var(--ink);padding:2px 0 2px 14px;margin:14px 0}
.state{font-size:13.5px;font-weight:600;padding:1px 7px;border:1px solid currentColor;border-radius:3px;white-space:nowrap}
.done{color:var(--soft)}
.doubtful{color:var(--alert);background:var(--alertwash)}
.skipped,.failed{color:var(--fail)}
h2 .state{margin-left:10px;vertical-align:2px}
.pair{display:grid;grid-template-columns:400px 1fr;gap:28px;align-items:start}
.grids{display:grid;grid-template-columns:1fr 1fr;gap:24px 28px}
svg text{font-size:12px;fill:var(--ink)}
svg .tick{fill:var(--soft);font-variant-numeric:tabular-nums}
svg .key{font-size:11.5px;fill:var(--soft)}
svg .title{font-weight:600;font-size:13px}
svg .key,svg .chosenname{paint-order:stroke;stroke:#fff;stroke-width:3px;stroke-linejoin:round}
svg .axis{font-size:12.5px}
svg .middle{text-anchor:middle}
svg .end{text-anchor:end}
svg .stripname{font-size:11.5px;fill:#8a3d12}
svg .mapname{font-size:11px;fill:var(--soft)}
.ground{fill:#fff;stroke:#c3cbd2;stroke-width:1}
.outline{fill:none;stroke:#8b97a1;stroke-width:.6}
.grid{stroke:#e6eaee;stroke-width:1}
.zero{stroke:#9aa5ae;stroke-width:1}
.stub{stroke:#8b97a1;stroke-width:1}
.flank{fill:#eef1f3}
.strip{fill:var(--strip);opacity:.8}
.expected{fill:#e4e8ec;opacity:.8}
.dots{fill:none;stroke:#5d6973;stroke-width:2.6;stroke-linecap:round}
circle.dot{fill:#5d6973}
.trace{fill:none;stroke:#5d6973;stroke-width:1;stroke-linejoin:round}
.fit{fill:none;stroke:var(--blue);stroke-width:1.8;stroke-linejoin:round}
.regional{fill:none;stroke:#5d6973;stroke-width:1.2;stroke-dasharray:5 4}
.band{fill:var(--band);opacity:.45;stroke:none}
.average{fill:none;stroke:var(--blue);stroke-width:2;stroke-linejoin:round}
.plain{fill:none;stroke:var(--verm);stroke-width:1;stroke-linejoin:round}
.target{stroke:#5d6973;stroke-width:1;stroke-dasharray:2 3}
.chosen{fill:none;stroke:var(--verm);stroke-width:2.2}
svg .chosenname{fill:var(--verm);font-weight:600}
.whisker{stroke:var(--blue);stroke-width:2.4}
.point{fill:var(--ink)}
.run{fill:none;stroke-linejoin:round;stroke-linecap:butt}
.casing{fill:none;stroke:#8b97a1;stroke-linejoin:round}
.mapstrip{stroke:#e5a079;stroke-linecap:butt}
.scalebar{stroke:var(--ink);stroke-width:1.4}
image{image-rendering:pixelated}
.arrow{fill:var(--ink)}
@media (max-width:760px){.pair,.grids{grid-template-columns:1fr}}
@media print{@page{margin:16mm 14mm}body{padding:0;font-size:10.5pt;max-width:none}h2{break-after:avoid}h3{break-after:avoid}figure,tr,.warn,.pair{break-inside:avoid}section.line{break-before:page}a{color:inherit;text-decoration:none}*{-webkit-print-color-adjust:exact;print-color-adjust:exact}}
`;

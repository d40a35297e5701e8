/** Petrol and brick on ink and slate, for light and dark. */
export const palette = `:root{color-scheme:light dark;--ground:#fbfaf7;--sheet:#fff;--ink:#17212b;--slate:#4a5560;--line:#c9ced3;--hair:#e6e8ea;--petrol:#0f6472;--brick:#a4452c;--band:#4a556030}
@media(prefers-color-scheme:dark){:root{--ground:#10161c;--sheet:#171f27;--ink:#e6ebef;--slate:#a9b4bf;--line:#3c4854;--hair:#27313b;--petrol:#62b6c4;--brick:#e58d72;--band:#a9b4bf38}}`;

/** How drawings look. */
export const drawingStyle = `.drawing{display:block;width:100%;height:auto;font-size:13px}
.drawing text{fill:var(--ink)}.drawing .mark,.drawing .axis-name{fill:var(--slate)}
.drawing .fence-name,.drawing .bracket-name,.drawing .curve-name{font-weight:600;paint-order:stroke;stroke:var(--sheet);stroke-width:4px;stroke-linejoin:round}
.drawing path,.drawing circle{fill:none}
.axis{stroke:var(--slate)}.hair{stroke:var(--hair)}.level{stroke:var(--slate);stroke-width:1}
.fence{stroke:var(--ink);stroke-width:1.3}
.drawing .band{fill:var(--band)}
.nominal{stroke:var(--petrol);stroke-width:2.2}.worst{stroke:var(--brick);stroke-width:2;stroke-dasharray:6 3}
.worst-2{stroke-dasharray:2 3}.worst-3{stroke-dasharray:12 3}
.latched{stroke:var(--ink);stroke-width:1.5;stroke-dasharray:10 3 2 3}
.target{stroke:var(--slate);stroke-width:1.2;stroke-dasharray:1.5 3}
.leader{stroke:var(--slate);stroke-width:.8}.bracket{stroke:var(--ink);stroke-width:1.6}.nominal-bracket{stroke:var(--petrol)}.worst-bracket{stroke:var(--brick)}
.critical{stroke:var(--ink);stroke-width:2}
.drawing .bracket-end{fill:var(--sheet);stroke-width:2}.nominal-end{stroke:var(--petrol)}.worst-end{stroke:var(--brick)}
.drawing .under-point{fill:var(--sheet);stroke:none}.drawing .nominal-point{fill:var(--sheet);stroke:var(--petrol);stroke-width:3}
.drawing .worst-point{fill:var(--brick);stroke:var(--sheet);stroke-width:1}
.drawing .latched-point{fill:var(--sheet);stroke:var(--ink);stroke-width:2}
.drawing .curve-name{font-style:italic;font-weight:400}
.hover rect{fill:transparent}.hover rect:hover{fill:var(--band)}
.drawing .cell{fill:var(--petrol);shape-rendering:crispEdges}.drawing .no-cell{fill:var(--hair)}
.hatch{stroke:var(--slate);stroke-width:1.4}.edge{stroke:var(--ink);stroke-width:1.8}`;

/** The page's only style sheet: petrol and brick on ink and slate, for light, dark, print and narrow screens. */
export const style = `
${palette}
*{box-sizing:border-box}
html{scroll-behavior:smooth;-webkit-text-size-adjust:100%}
body{margin:0;background:var(--ground);color:var(--ink);font:16px/1.5 "Source Sans 3","Segoe UI",Roboto,"Noto Sans",sans-serif;overflow-wrap:anywhere}
header,main,footer{max-width:1120px;margin:0 auto;padding:0 20px}
a{color:var(--petrol)}
:focus-visible{outline:3px solid var(--petrol);outline-offset:2px}
.skip{position:absolute;left:-999px}.skip:focus{position:static}
h1{font-size:1.9rem;line-height:1.2;margin:28px 0 6px;display:flex;flex-wrap:wrap;gap:4px 16px;align-items:center}
h2{font-size:1.4rem;margin:44px 0 4px;padding-top:14px;border-top:3px solid var(--ink)}
h3{font-size:1.08rem;margin:30px 0 6px}
p{margin:6px 0;max-width:74ch}
.lead,.about,.measure,.reason,figcaption,caption,dt,.caution{color:var(--slate)}
.measure{font-weight:400}
code,pre{font-family:ui-monospace,"Cascadia Mono","DejaVu Sans Mono",monospace;font-size:.88em}
pre{padding:10px;background:var(--ground);border:1px solid var(--line);overflow:auto;max-height:300px}
.verdict{display:inline-flex;align-items:baseline;gap:7px;font-weight:700;white-space:nowrap}
.sign{width:30px;height:20px;flex:none;align-self:center}.sign path{fill:none;stroke:currentColor;stroke-width:3;stroke-linecap:square}
.met{color:var(--petrol)}.broken,.slipped{color:var(--brick)}.unjudged{color:var(--slate)}
h1 .verdict{white-space:normal;gap:14px}h1 .sign{width:54px;height:36px}
.scroll{overflow-x:auto}
table{border-collapse:collapse;width:100%;font-variant-numeric:tabular-nums}
caption{text-align:left;padding:8px 0 2px}
th,td{overflow-wrap:break-word;text-align:left;vertical-align:baseline;padding:7px 14px 7px 0;border-bottom:1px solid var(--hair);font-weight:400}
thead th{white-space:nowrap;color:var(--slate);font-size:.86rem;border-bottom:1px solid var(--slate)}
tbody th{font-weight:600}
.number{text-align:right}
tr>:last-child{padding-right:0}
.summary tbody td{white-space:nowrap}.summary tbody td:nth-child(3){white-space:normal}.summary tbody th{overflow-wrap:anywhere;min-width:6ch}
.requirement{background:var(--sheet);border:1px solid var(--line);border-left:6px solid;padding:2px 20px 16px;margin:18px 0}
.met-side{border-left-color:var(--petrol)}.broken-side{border-left-color:var(--brick);border-left-style:double}.slipped-side{border-left-color:var(--brick);border-left-style:dotted}.unjudged-side{border-left-color:var(--slate);border-left-style:dashed}
.requirement h3{margin-top:14px;display:flex;flex-wrap:wrap;gap:2px 12px;align-items:baseline}.requirement h3 .sign{align-self:center}
.why{font-weight:600}
.share{display:block;width:120px;height:14px}.losses tbody th{overflow-wrap:anywhere;min-width:9ch}.share .lost{fill:var(--brick)}.share .gained{fill:var(--petrol)}
.columns{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,430px),1fr));gap:12px 32px;align-items:start}
@media(max-width:940px){.stack{display:contents}}
figure{margin:10px 0 4px;max-width:560px}
figcaption{font-size:.88rem}figcaption strong{color:var(--ink);margin-right:8px}
dl{margin:10px 0}dl>div{display:grid;grid-template-columns:92px 1fr;gap:12px;padding:3px 0}dd{margin:0}
details{margin-top:8px}summary{cursor:pointer;padding:4px 0}
ul{padding-left:20px}li{margin:4px 0}
.faults{border-left:6px double var(--brick);padding-left:14px;list-style:none}
footer{border-top:3px solid var(--ink);margin-top:48px;padding-top:14px;padding-bottom:40px}
${drawingStyle}
.key{display:inline-block;margin-right:12px}
.key::before{content:"";display:inline-block;vertical-align:middle;margin-right:6px;width:20px;height:0}
.nominal-key::before{width:12px;height:12px;border:3px solid var(--petrol);border-radius:50%}
.worst-key::before{width:10px;height:10px;background:var(--brick);transform:rotate(45deg);margin:0 9px 0 3px}
.fence-key::before{width:3px;height:16px;border-left:1.5px solid var(--ink);border-right:3px dotted var(--ink)}
.band-key::before{height:12px;background:var(--band)}
.nominal-line-key::before{border-top:2.5px solid var(--petrol)}
.worst-line-key::before{border-top:2.5px dashed var(--brick)}
.worst-2-line-key::before{border-top:2.5px dotted var(--brick)}.worst-3-line-key::before{width:30px;height:2.5px;background:linear-gradient(90deg,var(--brick) 13px,transparent 13px 17px,var(--brick) 17px)}
.latched-line-key::before{width:26px;height:1.5px;background:linear-gradient(90deg,var(--ink) 10px,transparent 10px 13px,var(--ink) 13px 15px,transparent 15px 18px,var(--ink) 18px)}
.latched-key::before{width:11px;height:11px;border:2px solid var(--ink)}
.ring-key::before{width:10px;height:10px;border:2px solid var(--brick);border-radius:50%}
.target-key::before{border-top:2px dotted var(--slate)}
@media(max-width:640px){.share{width:64px;height:9px}.losses thead th{white-space:normal}header,main,footer{padding:0 14px}.wide{display:none}h1{font-size:1.45rem}.requirement{padding:2px 12px 12px}th,td{padding-right:9px}th,td{font-size:.92rem}.verdict{gap:5px}.sign{width:27px}dl>div{gap:8px}.drawing{font-size:16px}}
@media print{:root{--ground:#fff;--sheet:#fff;--ink:#000;--slate:#333;--line:#999;--hair:#ccc;--petrol:#0f6472;--brick:#a4452c;--band:#4a556030}body{font-size:10pt}.summary tbody td{white-space:normal}.summary .verdict{white-space:nowrap}th,td{font-size:9pt;padding-right:8px}figure{max-width:420px}.scroll,pre{overflow:visible;max-height:none}figure,.requirement h3,tr{break-inside:avoid}h2,h3{break-after:avoid}a{color:inherit;text-decoration:none}.skip{display:none}}
`;

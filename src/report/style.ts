import { variables } from "./palette.ts";

const SERIF = `Charter, "Bitstream Charter", "Iowan Old Style", "Palatino Linotype", Georgia, "Liberation Serif", serif`;
const SANS = `system-ui, -apple-system, "Segoe UI", Helvetica, Arial, "Liberation Sans", sans-serif`;

/** The page's style sheet. Light by default, dark where the reader's system is, always light on paper. */
export const STYLE = `
:root{color-scheme:light dark;${variables("light")}}
@media screen and (prefers-color-scheme:dark){:root{${variables("dark")}}}
*{box-sizing:border-box}
[hidden]{display:none!important}
html{scroll-padding-top:1rem;-webkit-text-size-adjust:100%}
body{margin:0;overflow-wrap:anywhere;background:var(--page);color:var(--ink);font:16px/1.55 ${SANS};font-variant-numeric:tabular-nums}
a{color:var(--mark)}
:focus-visible{outline:3px solid var(--mark);outline-offset:2px;border-radius:2px}
.skip{position:absolute;left:-99rem}.skip:focus{left:1rem;top:1rem;background:var(--panel);padding:.4rem .8rem;z-index:5}
h1,h2,h3,.headline{font-family:${SERIF};line-height:1.2;text-wrap:balance}
h1{font-size:clamp(1.7rem,4.4vw,2.7rem);font-weight:600;letter-spacing:-.01em;margin:0}
h2{font-size:1.65rem;font-weight:600;margin:0 0 .8rem}
h3{font-size:1.13rem;font-weight:600;margin:2rem 0 .6rem}
p,ul,ol,dl{max-width:70ch;margin:.6rem 0}
.run{display:flex;height:12px}
.run i{height:100%;min-width:0;border-left:2px solid var(--mark);background:color-mix(in srgb,var(--mark) 30%,var(--page))}
.run i:nth-child(even){background:color-mix(in srgb,var(--mark) 12%,var(--page))}
.sheet{max-width:1440px;margin:0 auto;padding:0 clamp(1rem,3vw,2.5rem) 4rem}
header{padding:2.2rem 0 1.4rem}
.facts{display:flex;flex-wrap:wrap;gap:.2rem 1.6rem;color:var(--muted);margin:.7rem 0 0;padding:0;list-style:none;max-width:none}
.facts b{color:var(--ink);font-weight:600}
nav ol{list-style:none;margin:0;padding:0;max-width:none}
nav a{color:var(--muted);text-decoration:none;display:inline-block;padding:.25rem 0}
nav a:hover,nav a:focus-visible,nav a.here{color:var(--ink)}
section{border-top:1px solid var(--rule);padding:2rem 0 2.2rem}
section:first-of-type{border-top:0;padding-top:0}
main{min-width:0}
@media (max-width:1179px){nav{border-block:1px solid var(--rule);margin-bottom:2rem;padding:.5rem 0}nav ol{display:flex;flex-wrap:wrap;gap:0 1.1rem}}
@media (min-width:1180px){.sheet>.body{display:grid;grid-template-columns:178px minmax(0,1fr);gap:3rem}
nav{position:sticky;top:1.2rem;align-self:start;border-left:2px solid var(--rule)}
nav li{position:relative}nav a{padding:.28rem 0 .28rem 1.1rem}
nav li::before{content:"";position:absolute;left:-2px;top:.95rem;width:.7rem;border-top:2px solid var(--rule)}
nav li:has(.here)::before,nav li:hover::before{border-color:var(--mark)}}
.headline{font-size:clamp(1.25rem,2.6vw,1.72rem);line-height:1.32;max-width:54ch;margin:.2rem 0 1.6rem;text-wrap:pretty}
.grade{display:flex;flex-wrap:wrap;align-items:baseline;gap:.3rem 1rem;margin:0 0 1.1rem;padding:0;max-width:none}
.grade span{color:var(--muted)}
.grade b{font-weight:600;background:var(--mark);color:var(--panel);padding:.1rem .7rem .16rem;border-radius:2px}
.said{display:grid;grid-template-columns:repeat(auto-fit,minmax(min(100%,16rem),1fr));gap:1.2rem 2rem;max-width:none;margin:0}
.said dt{font-family:${SERIF};font-weight:600;border-top:2px solid var(--mark);padding-top:.5rem}
.said dd{margin:.2rem 0 0}
blockquote{margin:1rem 0;padding:.2rem 0 .2rem 1.2rem;border-left:3px solid var(--mark);max-width:70ch}.note{border-left:3px solid var(--less);padding:.1rem 0 .1rem 1rem;margin:1rem 0}
figure{margin:1.6rem 0 2rem;background:var(--panel);border:1px solid var(--rule);border-radius:3px;padding:1.1rem 0 1rem}
figure .scroll{padding:0 1.1rem;overflow-x:auto;overflow-y:hidden}
figure svg{display:block;height:auto;width:100%;margin:0 auto 0 0}
figcaption{padding:.8rem 1.1rem 0;max-width:78ch;color:var(--muted)}
figcaption b{display:block;color:var(--ink);font-family:${SERIF};font-size:1.08rem;font-weight:600}
@media (min-width:1180px){figure.narrow{display:grid;grid-template-columns:minmax(0,max-content) minmax(15rem,1fr);align-items:start}figure.narrow figcaption{padding:.6rem 1.4rem 0 .4rem}}
.grid{margin:1rem 0 1.6rem}
.scroll{overflow-x:auto;overflow-y:hidden;max-width:100%}
.scroll.wide{background:linear-gradient(90deg,var(--panel) 30%,transparent) left/3rem 100% no-repeat local,linear-gradient(270deg,var(--panel) 30%,transparent) right/3rem 100% no-repeat local,linear-gradient(90deg,color-mix(in srgb,var(--ink) 22%,transparent),transparent) left/.8rem 100% no-repeat,linear-gradient(270deg,color-mix(in srgb,var(--ink) 22%,transparent),transparent) right/.8rem 100% no-repeat}
.scroll{background-color:var(--panel)}.grid .scroll{width:fit-content}
table{border-collapse:collapse;overflow-wrap:normal;font-size:.9rem;line-height:1.4}
caption{text-align:left;background:var(--page);font-family:${SERIF};font-weight:600;font-size:1.08rem;padding:0 0 .5rem}
th,td{text-align:left;vertical-align:top;padding:.36rem .6rem;border-bottom:1px solid var(--rule)}
thead th{font-weight:600;border-bottom:2px solid var(--rule);vertical-align:bottom;background:var(--wash)}
thead small{display:block;font-weight:400;color:var(--muted)}
.n{text-align:right;white-space:nowrap}
th.n{white-space:normal;min-width:5rem}
td.w,th.w{min-width:11rem}
.n small{white-space:normal;display:inline-block;max-width:6rem;line-height:1.25}
td small{color:var(--muted)}
tr.best td{background:var(--wash)}
.cov{border-radius:2px}td .cov{white-space:nowrap}
.cov svg{width:.8em;height:.8em;margin-right:.45em;vertical-align:-.03em;overflow:visible}
.cov[role=button]{cursor:pointer;text-decoration:underline dotted var(--muted);text-underline-offset:.22em}
.cov[aria-pressed=true]{background:var(--wash);outline:2px solid var(--mark)}
.themes{display:flex;flex-wrap:wrap;gap:.3rem 1.4rem;list-style:none;padding:0;max-width:none}
details{border:1px solid var(--rule);border-radius:3px;background:var(--panel);margin:.7rem 0;max-width:100%}
summary{cursor:pointer;padding:.6rem 1rem;font-weight:600}
summary small{font-weight:400;color:var(--muted);margin-left:.5rem}
details>.in{padding:0 1rem 1rem}.fold caption{display:none}.fold .grid{margin:0}
pre{overflow-x:auto;margin:0;font:13px/1.5 ui-monospace,"SF Mono",Menlo,Consolas,"Liberation Mono",monospace;white-space:pre-wrap;overflow-wrap:anywhere}
code{font:.9em ui-monospace,"SF Mono",Menlo,Consolas,"Liberation Mono",monospace;overflow-wrap:anywhere}
.found{list-style:none;padding:0;max-width:none;margin:0}.found li{display:grid;grid-template-columns:minmax(0,15rem) minmax(0,1fr);gap:0 1.6rem;border-top:1px solid var(--rule);padding:.6rem 0}.found p{margin:0}.found .do{color:var(--muted)}
@media (max-width:720px){.found li{grid-template-columns:1fr;gap:.3rem}}
.severity{font-weight:600}.severity.stop{color:var(--less)}
button,select,input{font:inherit;color:inherit}
button,select{background:var(--panel);border:1px solid var(--muted);border-radius:2px;padding:.2rem .7rem;cursor:pointer}
button.copy{font-size:.82rem;margin:.5rem 0 0;border-color:var(--rule);color:var(--muted)}button.copy:hover,button.copy:focus-visible{color:var(--ink);border-color:var(--muted)}
.tools{display:flex;flex-wrap:wrap;gap:.6rem 1rem;align-items:center;margin:.8rem 0}
.lit [data-covariate],.lit [data-covariates]{opacity:.22;transition:opacity .12s}
.lit [data-covariate].on,.lit [data-covariates].on{opacity:1}
.lit tr[data-covariate],.lit .cov{opacity:.55}.lit tr.on,.lit .cov.on{opacity:1}
.pin{position:fixed;right:1rem;bottom:1rem;background:var(--panel);border:2px solid var(--mark);border-radius:3px;padding:.5rem .8rem;display:flex;gap:.8rem;align-items:center;z-index:4;max-width:calc(100vw - 2rem)}
.walk{background:var(--panel);border:1px solid var(--rule);border-radius:3px;padding:.2rem 1.1rem .6rem;margin:1.6rem 0 2rem}.walk h3{margin-top:.8rem}
.walk input{width:min(100%,44rem);accent-color:var(--mark);display:block}
.walk output{display:block;min-height:3.2em}.walk h4{margin:.8rem 0 .1rem;font-weight:600;font-size:.9rem}.walk .pane svg{max-width:700px;width:100%}
.standing{display:flex;flex-wrap:wrap;gap:.2rem .5rem;list-style:none;padding:0;max-width:none}.standing li{padding:.05rem .5rem;border:1px dashed transparent;border-radius:2px}.standing li.stands{border:1px solid var(--mark);font-weight:600}
.choice{border:0;padding:0;margin:1rem 0 0;min-width:0}.choice legend{float:left;padding:0;margin-right:.4rem;font-weight:600}.choice label{display:inline-flex;align-items:center;gap:.35rem;cursor:pointer}.choice input{accent-color:var(--mark);margin:0}
@media screen{.off{display:none}}
.caution{border-left:3px solid var(--rule);padding:.05rem 0 .05rem 1rem;color:var(--muted)}.caution b{color:var(--ink);font-weight:600}
@media (prefers-reduced-motion:reduce){*{transition:none!important}}
@page{size:A4;margin:15mm 14mm 16mm}
@media print{:root{color-scheme:light}body{background:#fff;font-size:10.5pt}nav,.skip,button,.tools,.walk,.pin{display:none!important}
.sheet{padding:0;max-width:none}header{padding-top:1rem}section{padding:1rem 0}
caption{background:none}figure,details,table{break-inside:avoid}table{break-inside:auto}tr{break-inside:avoid}
figure{border:0;padding:.4rem 0;background:none}figure .scroll,figcaption{padding-left:0;padding-right:0}.scroll{overflow:visible}
figure svg{min-width:0!important;max-width:100%!important;max-height:18cm}figure.narrow svg{max-height:10.5cm;max-width:78%!important}figure{margin:.6rem 0}.findings details{break-inside:auto}.found{font-size:8.5pt;line-height:1.35}.found li{break-inside:avoid}.found li{padding:.3rem 0}#methods{font-size:9.5pt}table{font-size:8pt;width:100%}th,td{padding:.2rem .35rem;white-space:normal!important}td.w,th.w,th.n{min-width:0}
h2,h3,caption,thead{break-after:avoid}tbody tr:first-child{break-before:avoid}
#record details{border:0;margin:0}#record summary{padding:.1rem 0;font-size:8pt}details.fold{border:0}.fold summary{padding:.2rem 0}}
`.trim();

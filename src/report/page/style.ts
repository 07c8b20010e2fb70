import { fontFamily, themeVariables } from "../../svg/theme.js";

/** What fades at the side of something that scrolls, as long as there is more on that side. */
const scrollShadow =
  "background:linear-gradient(90deg,var(--bm-paper) 45%,transparent) left -2px top 0/2.6rem 100% no-repeat local," +
  "linear-gradient(270deg,var(--bm-paper) 45%,transparent) right -2px top 0/2.6rem 100% no-repeat local," +
  "linear-gradient(90deg,var(--bm-hatch),transparent) 0 0/.8rem 100% no-repeat scroll," +
  "linear-gradient(270deg,var(--bm-hatch),transparent) 100% 0/.8rem 100% no-repeat scroll";

/** The style of a report page: the drawings' colours and face, light and dark, and paper. */
export const reportStyle =
  themeVariables(":root") +
  `
:root{color-scheme:light dark}
*{box-sizing:border-box}
body{margin:0 auto;max-width:58rem;padding:2.5rem 1.5rem 4rem;background:var(--bm-paper);color:var(--bm-ink);font:15px/1.55 ${fontFamily};font-variant-numeric:tabular-nums}
h1{font-size:1.7rem;line-height:1.2;margin:0 0 .3rem;text-wrap:balance}
h2{font-size:1.15rem;margin:2.6rem 0 .7rem;padding-top:.7rem;border-top:2px solid var(--bm-wall)}
h3{font-size:1rem;margin:1.5rem 0 .3rem}
p{margin:.4rem 0;max-width:46rem}
.quiet,.under,figcaption,caption,footer{color:var(--bm-quiet)}
.under{font-size:.85em;font-weight:400}
.unseen,.skip:not(:focus){position:absolute;width:1px;height:1px;overflow:hidden;clip-path:inset(50%);white-space:nowrap}
.skip:focus{position:absolute;left:1rem;top:.6rem;padding:.2rem .6rem;background:var(--bm-paper)}
.answer{margin:1.4rem 0;padding:.1rem 0 .1rem 1.2rem;border-left:5px solid var(--bm-accent)}
.answer:focus{outline:none}
.answer dl{margin:0;display:grid;grid-template-columns:max-content 1fr;gap:.45rem 1.2rem}
.answer dt{margin:0;color:var(--bm-quiet);font-weight:400;font-size:.9rem;padding-top:.1rem}
.answer dd{grid-column:2;font-size:1.05rem}
.answer dd:first-of-type{font-weight:700}
nav{font-size:.9rem;margin:1rem 0 0}
nav a{color:var(--bm-wall);margin-right:1rem;white-space:nowrap}
a{color:var(--bm-wall)}
ul,ol{padding-left:1.3rem;margin:.4rem 0}
li{margin:.25rem 0;max-width:46rem}
.figures{display:grid;grid-template-columns:repeat(auto-fill,minmax(min(100%,22rem),1fr));gap:1.4rem 2rem;margin:1.2rem 0;align-items:start}
.figures .wide{grid-column:1/-1}
figure{margin:0;min-width:0;break-inside:avoid}
.drawing svg{display:block;overflow:visible}
.drawing:focus-visible,.scroll:focus-visible,button:focus-visible,a:focus-visible{outline:2px solid var(--bm-accent);outline-offset:2px}
.tools{position:relative;margin:.5rem 0 0;display:flex;gap:.5rem;flex-wrap:wrap;align-items:baseline}
.hint{font-size:.85rem;color:var(--bm-quiet)}
.told{position:absolute;z-index:1;top:calc(100% + .25rem);left:0;max-width:40rem;font-size:.85rem;background:var(--bm-paper);pointer-events:none}
.told:not(:empty){padding:.1rem .6rem;border:1px solid var(--bm-faint);border-radius:4px}
button{font:inherit;font-size:.8rem;color:var(--bm-wall);background:none;border:1px solid var(--bm-faint);border-radius:4px;padding:.15rem .6rem;cursor:pointer}
button:hover{border-color:var(--bm-wall)}
figcaption{font-size:.9rem;margin-top:.3rem;max-width:46rem}
.scroll{overflow-x:auto;margin:1rem 0;${scrollShadow}}
.beside{display:flex;flex-wrap:wrap;gap:0 2.5rem}
.beside .scroll{max-width:100%;margin-bottom:0}
table{border-collapse:collapse;min-width:55%}
.beside table{min-width:0}
caption{text-align:left;font-size:.9rem;padding-bottom:.35rem}
th,td{text-align:left;vertical-align:baseline;padding:.32rem 1.1rem .32rem 0;border-bottom:1px solid var(--bm-faint)}
th:last-child,td:last-child{padding-right:0}
thead th{font-size:.85rem;color:var(--bm-quiet);font-weight:700;border-bottom:1.5px solid var(--bm-quiet);vertical-align:bottom}
tbody th{font-weight:700}
.number{text-align:right}
tbody .number{white-space:nowrap}
dl{margin:.6rem 0}
dt{font-weight:700;margin-top:.6rem}
dd{margin:0;max-width:46rem}
.graded{font-weight:700}
.graded .quiet{font-weight:400}
.grade{display:inline-block;border:1.5px solid var(--bm-wall);border-radius:4px;padding:0 .45rem;margin-right:.5rem}
.finding{margin:1rem 0;padding-left:1rem;border-left:3px solid var(--bm-faint)}
.finding p:first-child{font-weight:700}
code{font:.85em ui-monospace,Menlo,Consolas,monospace;overflow-wrap:anywhere}
footer{margin-top:3rem;font-size:.85rem}
@media (max-width:40rem){
body{padding:1.2rem .9rem 3rem}
.wide .drawing{overflow-x:auto}
.wide .drawing svg{overflow:hidden;max-width:none!important;min-width:34rem;width:34rem}
.wide figcaption::before{content:"The picture goes on sideways. "}
th,td{padding-right:.8rem}
tbody th{min-width:8rem}
tbody td:not(.number):not(:empty){min-width:10rem}
thead th.number{min-width:4.5rem}
.answer{padding-left:.8rem}
.answer dl{display:block}
.answer dt{margin-top:.6rem}
}
@page{margin:14mm}
@media print{
:root{font-size:9.5pt}
body{max-width:none;padding:0;font-size:1rem;line-height:1.38}
nav,.tools,.skip{display:none}
h1{font-size:16pt}
h2{font-size:12.5pt;margin:1.3rem 0 .4rem;padding-top:.4rem;break-after:avoid}
h3,caption,.graded{break-after:avoid}
p,li{orphans:2;widows:2}
p,li,dd,figcaption{max-width:none}
figcaption{font-size:8.5pt;line-height:1.3}
.figures{display:block;margin:.5rem 0 0;orphans:1;widows:1}
figure{display:inline-block;vertical-align:top;width:calc(50% - 2.5mm);margin:0 0 .7rem}
figure:nth-child(odd){margin-right:5mm}
figure.wide{width:100%;margin-right:0}
figure,tr,.finding,.answer,li,.together,.beside,.short{break-inside:avoid}
.finding{margin:.6rem 0}
.drawing{overflow:visible!important}
figure svg{max-height:235mm}
.scroll{overflow:visible;margin:.6rem 0;background:none}
.beside{gap:0 5mm}
.beside .scroll{flex:0 1 calc(50% - 2.5mm)}
.beside table{font-size:7.5pt}
.beside th,.beside td{padding-right:.5rem}
table{font-size:8.5pt;min-width:0}
th,td{padding:.16rem .7rem .16rem 0}
caption,thead th{font-size:8.5pt}
thead{display:table-header-group}
}
`.trim();

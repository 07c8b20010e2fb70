import { fontFamily, themeVariables } from "../../svg/theme.js";

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
.answer{margin:1.4rem 0;padding:.1rem 0 .1rem 1.2rem;border-left:5px solid var(--bm-accent)}
.answer dl{margin:0;display:grid;grid-template-columns:max-content 1fr;gap:.45rem 1.2rem}
.answer dt{margin:0;color:var(--bm-quiet);font-weight:400;font-size:.9rem;padding-top:.1rem}
.answer dd{grid-column:2;font-size:1.05rem}
.answer dd:first-of-type{font-weight:700}
nav{font-size:.9rem;margin:1rem 0 0}
nav a{color:var(--bm-wall);margin-right:1rem;white-space:nowrap}
ul,ol{padding-left:1.3rem;margin:.4rem 0}
li{margin:.25rem 0;max-width:46rem}
figure{margin:1.2rem 0;break-inside:avoid}
.drawing svg{display:block;overflow:visible}
.drawing:focus-visible,button:focus-visible,a:focus-visible{outline:2px solid var(--bm-accent);outline-offset:2px}
.tools{margin:.5rem 0 0;display:flex;gap:.5rem;flex-wrap:wrap;align-items:baseline}
.told{font-size:.85rem;color:var(--bm-quiet);margin-left:.4rem;max-width:40rem}
.told:not(:empty){min-height:1.5em}
button{font:inherit;font-size:.8rem;color:var(--bm-wall);background:none;border:1px solid var(--bm-faint);border-radius:4px;padding:.15rem .6rem;cursor:pointer}
button:hover{border-color:var(--bm-wall)}
figcaption{font-size:.9rem;margin-top:.3rem;max-width:46rem}
.wide{overflow-x:auto;margin:1rem 0}
table{border-collapse:collapse;min-width:55%}
caption{text-align:left;font-size:.9rem;padding-bottom:.35rem}
th,td{text-align:left;vertical-align:baseline;padding:.32rem 1.1rem .32rem 0;border-bottom:1px solid var(--bm-faint)}
thead th{font-size:.85rem;color:var(--bm-quiet);font-weight:700;border-bottom:1.5px solid var(--bm-quiet);vertical-align:bottom}
tbody th{font-weight:700}
.number{text-align:right}
tbody .number{white-space:nowrap}
dl{margin:.6rem 0}
dt{font-weight:700;margin-top:.6rem}
dd{margin:0;max-width:46rem}
.grade{display:inline-block;border:1.5px solid var(--bm-wall);border-radius:4px;padding:0 .45rem;margin-right:.5rem;font-weight:700}
.finding{margin:1rem 0;padding-left:1rem;border-left:3px solid var(--bm-faint)}
.finding p:first-child{font-weight:700}
code{font:.85em ui-monospace,Menlo,Consolas,monospace;overflow-wrap:anywhere}
footer{margin-top:3rem;font-size:.85rem}
@media (max-width:40rem){
body{padding:1.2rem .9rem 3rem}
.drawing{overflow-x:auto}
.drawing svg{overflow:hidden;max-width:none!important;min-width:34rem;width:34rem}
.answer{padding-left:.8rem}
.answer dl{display:block}
.answer dt{margin-top:.6rem}
}
@page{margin:16mm 15mm}
@media print{
body{max-width:none;padding:0;font-size:10pt;line-height:1.4}
nav,.tools,.told{display:none}
.drawing{overflow:visible}
h1{font-size:17pt}
h2{margin-top:1.4rem;break-after:avoid}
h3,caption{break-after:avoid}
figure,tr,.wide,.finding,.answer,dt{break-inside:avoid}
figure svg{max-height:120mm}
.wide{overflow:visible}
thead{display:table-header-group}
}
`.trim();

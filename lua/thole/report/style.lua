-- The look of a report: one column on a phone, charts side by side where the screen is wide, light or
-- dark as the reader's device asks. Charts bring their own rules (thole.svg).

local svg = require "thole.svg"

local function colours(scheme)
    return (":root{--ground:%s;--ink:%s;--soft:%s;--rule:%s;--band:%s;--mark:%s;--loop:%s}\n")
            :format(scheme.ground, scheme.ink, scheme.soft, scheme.rule, scheme.night, scheme[1], scheme[2])
end

local PAGE = [[
*{box-sizing:border-box}
html{-webkit-text-size-adjust:100%;text-size-adjust:100%}
body{margin:0 auto;max-width:112rem;padding:1.25rem clamp(1rem,3vw,3rem) 4rem;
background:var(--ground);color:var(--ink);font:1rem/1.55 system-ui,sans-serif;overflow-wrap:break-word}
h1,h2,h3{font-family:"Iowan Old Style","Palatino Linotype",Palatino,Georgia,serif;font-weight:600;
line-height:1.2;text-wrap:balance}
h1{font-size:clamp(1.7rem,1.2rem + 2vw,2.9rem);margin:.6rem 0 .4rem}
h2{font-size:1.5rem;margin:0 0 .75rem}
h3{font-size:1.1rem;margin:1.25rem 0 .5rem}
p,ul,dl{max-width:46rem;margin:0 0 .9rem}
.lead{font-size:1.1rem;color:var(--soft)}
header{border-top:.5rem solid var(--mark);padding-top:.25rem}
nav{margin:1rem 0 0}
nav ul{display:flex;flex-wrap:wrap;gap:.25rem 1.25rem;list-style:none;padding:0;max-width:none}
a{color:var(--mark);text-underline-offset:.2em}
section{border-top:1px solid var(--rule);padding-top:1.5rem;margin-top:1.75rem}
.figures{display:grid;grid-template-columns:repeat(auto-fit,minmax(min(100%,13rem),1fr));gap:1.25rem 2rem;
max-width:none;margin:0 0 1.75rem;padding:0;list-style:none}
.figures li{border-left:.25rem solid var(--mark);padding-left:.8rem}
.figures strong{display:block;
font:600 1.9rem/1.25 "Iowan Old Style","Palatino Linotype",Palatino,Georgia,serif}
.figures span{display:block;color:var(--soft);line-height:1.4}
.findings{list-style:none;padding:0}
.findings li{margin:0 0 .6rem;padding-left:1rem;border-left:.15rem solid var(--rule)}
.pair{display:grid;grid-template-columns:repeat(auto-fit,minmax(min(100%,38rem),1fr));gap:1.5rem 3rem}
.pair.small{grid-template-columns:repeat(auto-fit,minmax(min(100%,22rem),1fr))}
figure{margin:0;min-width:0}
figcaption{font-size:.9rem;color:var(--soft);max-width:46rem;margin-top:.5rem}
figure h3{margin-top:0}
.chart svg{display:block;overflow:visible}
.chart svg.square{width:100%;aspect-ratio:1}
.square-box{max-width:44rem}
.note{font-size:.9rem;color:var(--soft);margin:.75rem 0}
.scroll{overflow-x:auto}
table{border-collapse:collapse;font-variant-numeric:tabular-nums;width:100%;max-width:64rem}
th,td{text-align:left;padding:.35rem 1.25rem .35rem 0;border-bottom:1px solid var(--rule);vertical-align:top}
th{font-weight:600;font-size:.9rem}
.number{text-align:right}
.facts{display:grid;grid-template-columns:minmax(8rem,auto) 1fr;gap:.3rem 1.25rem;max-width:64rem}
.facts dt{color:var(--soft)}
.facts dd{margin:0;min-width:0}
.caution{border:2px solid var(--loop);border-radius:.4rem;padding:1rem 1.25rem .3rem;max-width:64rem;
background:var(--band)}
.caution h2{font-size:1.2rem}
code{font:.92em/1.5 ui-monospace,monospace;overflow-wrap:anywhere}
footer{margin-top:2.5rem;border-top:1px solid var(--rule);padding-top:1rem;color:var(--soft);font-size:.9rem}
@media (max-width:44rem){
.facts{grid-template-columns:1fr;gap:0}
.facts dd{margin-bottom:.6rem}
.stack thead{position:absolute;width:1px;height:1px;overflow:hidden;clip-path:inset(50%)}
.stack,.stack tbody{display:block}
.stack tr{display:grid;grid-template-columns:1fr 1fr;
gap:.1rem 1rem;border-bottom:1px solid var(--rule);padding:.6rem 0}
.stack.tight tr{grid-template-columns:repeat(3,1fr)}
.stack th,.stack td{border:0;padding:0;text-align:left}
.stack td::before{content:attr(data-label);display:block;font-size:.8rem;color:var(--soft)}
.stack .whole{grid-column:1/-1}
}
@media print{nav{display:none}section{break-inside:avoid}}
]]

return function()
    return colours(svg.light) .. "@media (prefers-color-scheme:dark){" .. colours(svg.dark) .. "}\n" .. PAGE
            .. svg.style()
end

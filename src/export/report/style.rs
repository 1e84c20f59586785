//! How the page looks: light, dark, printed, and on a narrow screen.

pub(super) const STYLE: &str = "
:root{color-scheme:light dark;--ink:#1c1e22;--soft:#565b65;--paper:#fcfcfa;--line:#d9dbe0;
--tint:#f3f1ea;--yes:#1f4e92;--no:#96390d;--open:#5b5f69}
@media (prefers-color-scheme:dark){:root{--ink:#e7e8ea;--soft:#a9aeb8;--paper:#16181c;--line:#3a3e46;
--tint:#20242a;--yes:#8fb4ea;--no:#f0a274;--open:#b4b8c1}}
*{box-sizing:border-box}
body{margin:0;background:var(--paper);color:var(--ink);font:16px/1.5 system-ui,sans-serif}
main{max-width:68rem;margin:0 auto;padding:1.5rem 1rem 3rem}
h1{font-size:1.6rem;line-height:1.25;margin:0 0 1rem;overflow-wrap:anywhere}
h2{font-size:1.15rem;margin:2rem 0 .5rem}
h3{font-size:1rem;margin:1.25rem 0 .25rem}
.kind{margin:0;color:var(--soft);font-size:.9rem}
.verdict{display:flex;gap:1rem;align-items:flex-start;border-left:.4rem solid var(--mark);
background:var(--tint);padding:.9rem 1rem;overflow-wrap:anywhere}
.verdict p{margin:0}
.verdict .answer{font-weight:600;font-size:1.15rem}
.mark{color:var(--mark);font-size:2.2rem;line-height:1;font-weight:700}
.yes{--mark:var(--yes)}.no{--mark:var(--no)}.open{--mark:var(--open)}
figure{margin:1.75rem 0}
.card{background:#fff;border:1px solid var(--line);padding:.5rem;overflow-x:auto}
.card svg{display:block;width:100%;min-width:40rem;height:auto}
figcaption,.note{color:var(--soft);font-size:.9rem;margin:.5rem 0 0}
.scroll{overflow-x:auto;margin:1.75rem 0 0}
table{border-collapse:collapse;width:100%;font-size:.92rem;font-variant-numeric:tabular-nums}
caption{text-align:left;font-weight:600;padding:0 0 .4rem}
th,td{text-align:left;vertical-align:top;padding:.32rem .6rem;border-bottom:1px solid var(--line)}
thead th{border-bottom:2px solid var(--ink);font-weight:600;vertical-align:bottom}
tbody th{font-weight:400}
.number{text-align:right;white-space:nowrap}
thead .number{white-space:normal}
th small{color:var(--soft);border:1px solid var(--line);padding:0 .3em;white-space:nowrap}
.share{display:inline-block;height:.6em;background:var(--yes);margin-right:.5em}
.cautions dt{font-weight:600}.cautions dd{margin:0 0 .6rem}
.steps{padding-left:1.4rem;overflow-wrap:anywhere}
code{font-size:.82em;overflow-wrap:anywhere}
footer{margin-top:2.5rem;border-top:1px solid var(--line);padding-top:.75rem;color:var(--soft)}
@media (max-width:40rem){table{font-size:.82rem}th,td{padding:.3rem .35rem}.mark{display:none}
main{padding:1rem .75rem 2rem}}
@media print{.card svg{min-width:0}:root{--ink:#000;--soft:#333;--paper:#fff;--line:#999;--tint:#fff;--yes:#1f4e92;
--no:#96390d;--open:#333}body{font-size:10pt}main{max-width:none;padding:0}
.scroll{overflow:visible}table{font-size:8pt}.card{border:0;padding:0}
figure,tr,.verdict{break-inside:avoid}}
";

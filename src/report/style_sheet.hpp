// How pages look, on screen and on paper.
#pragma once

#include <string_view>

namespace entrain::report {

inline constexpr std::string_view common_style = R"(
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 78rem; padding: 1.2rem; color: #000; background: #fff;
  font-family: "Helvetica Neue", Arial, "Liberation Sans", "DejaVu Sans", sans-serif; line-height: 1.3; overflow-wrap: anywhere; }
h1 { font-size: 1.9rem; margin: 0 0 .3rem; line-height: 1.1; }
h2 { font-size: 1.2rem; margin: 1.6rem 0 .4rem; padding-top: .35rem; border-top: 2px solid #000; }
h3 { font-size: 1rem; margin: 1rem 0 .3rem; }
p { margin: .3rem 0; }
table { border-collapse: collapse; margin: .4rem 0; font-variant-numeric: tabular-nums; }
caption { text-align: left; font-weight: bold; padding: .3rem 0; }
th, td { border-bottom: 1px solid #999; padding: .16rem .5rem; text-align: left; vertical-align: baseline; }
th { border-bottom: 1.5px solid #000; font-weight: bold; vertical-align: bottom; font-size: .86rem; line-height: 1.1; overflow-wrap: normal; }
td { overflow-wrap: break-word; } td.long { overflow-wrap: anywhere; }
.r { text-align: right; } .c { text-align: center; } td.r:not(.long), td.c:not(.long) { overflow-wrap: normal; white-space: nowrap; }
td.s, span.s { font-weight: bold; }
small { font-size: .78em; font-weight: normal; white-space: nowrap; }
.note, .small { font-size: .8rem; }
.notice { border: 2.5px solid #000; padding: .4rem .7rem; margin: .6rem 0; }
.notice strong { display: block; font-size: 1.7rem; line-height: 1.15; }
.notice.quiet { border-width: 1px; } .notice.quiet strong { font-size: 1.1rem; display: inline; margin-right: .8em; }
.notice.alarm { border-width: 5px; } .notice.alarm strong { font-size: 2.1rem; }
ul { margin: .3rem 0; padding-left: 1.2rem; } li { margin: .1rem 0; }
dl { display: grid; grid-template-columns: max-content 1fr; gap: .12rem .8rem; margin: .3rem 0; }
dt { font-size: .86rem; } dd { margin: 0; font-variant-numeric: tabular-nums; }
figure { margin: .6rem 0; } figure svg { max-width: 100%; height: auto; display: block; }
.wide { overflow-x: auto; }
tr, figure, .notice { break-inside: avoid; } h2, h3, caption { break-after: avoid; } thead { display: table-header-group; }
@media print { body { max-width: none; padding: 0 .5mm; } .wide { overflow: visible; } a { color: #000; text-decoration: none; } }
)";

// Timing sheets: one front page that is keyed in from, one back that says why it is safe.
inline constexpr std::string_view sheet_style = R"(
body { max-width: 62rem; }
.head { display: grid; grid-template-columns: 1fr 19rem; gap: .8rem; border-bottom: 3px solid #000; padding-bottom: .3rem; }
.head h1 { font-size: 3.4rem; line-height: 1; margin: 0; overflow-wrap: anywhere; }
.head .name { font-size: 1.5rem; font-weight: bold; line-height: 1.15; }
.head .project { font-size: .95rem; }
.sketch svg { width: 19rem; height: auto; max-height: 17rem; } .sketch { margin: 0; }
.signed { grid-template-columns: max-content 1fr max-content 1fr; gap: .35rem .6rem; margin: .6rem 0 0; }
.signed dd { border-bottom: 1px solid #000; min-height: 1.5rem; } .signed dd.seal { border: 1px solid #000; height: 4.6rem; grid-column: span 3; }
.cards { display: grid; grid-template-columns: repeat(auto-fit, minmax(17rem, 1fr)); gap: .6rem; margin: .6rem 0; }
.card { border: 1.5px solid #000; padding: .25rem .6rem .35rem; }
.card h3 { margin: 0 0 .15rem; font-size: 1.25rem; border-bottom: 1px solid #000; }
.card small { white-space: normal; }
.card dl { grid-template-columns: minmax(0, max-content) minmax(8.5rem, 1fr); gap: 0 .6rem; margin: 0; align-items: baseline; } .card dt { font-size: .84rem; line-height: 1.15; }
.card dd { font-size: 1rem; line-height: 1.2; } .card dd.big { font-size: 1.95rem; font-weight: bold; line-height: 1.05; }
.card dd.middle { font-size: 1.3rem; font-weight: bold; line-height: 1.1; }
.phases { width: 100%; } .phases td { font-size: 1.12rem; padding: .1rem .35rem; vertical-align: middle; } .phases th { padding: .1rem .35rem; font-size: .8rem; }
.phases td:first-child { font-weight: bold; font-size: 1.35rem; } .phases td:nth-child(2) { font-size: .92rem; line-height: 1.12; }
.dense td { font-size: .98rem; padding: .1rem .2rem; } .dense th { font-size: .72rem; padding: .1rem .2rem; }
.log { width: 100%; } .log td { height: 1.55rem; } .log td:nth-child(3) { width: 55%; }
.phases .r, .phases .c { white-space: nowrap; } .phases th.r, .phases th.c { white-space: normal; }
.matrix td, .matrix th { text-align: center; border: 1px solid #999; padding: .1rem .25rem; font-size: .86rem; } .matrix td:first-child { font-weight: bold; }
.front h2, .back h2 { margin: .7rem 0 .15rem; border-top-width: 1px; font-size: 1rem; padding-top: .15rem; }
.front .notice { margin: .4rem 0; padding: .15rem .6rem; }
.back { margin-top: 2.5rem; } .back table { font-size: .88rem; } .back th { font-size: .78rem; } .back li { font-size: .86rem; } .back h1 { font-size: 1.5rem; }
.cautions { font-size: .8rem; line-height: 1.2; }
@media print { .back { break-before: page; margin-top: 0; } }
)";

}  // namespace entrain::report

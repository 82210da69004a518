/** The colours and lettering of a timing diagram, on a light and on a dark ground. */
export const STYLE = `
svg { background: #fbfaf7 }
.ground { fill: #fbfaf7 }
text { fill: #2c3138; font: 13px system-ui, sans-serif }
.title { font-size: 18px; font-weight: 600 }
.quiet { fill: #5d646d; font-size: 12px }
.value { font: 11.5px ui-monospace, monospace; fill: #1f4b50 }
.band { fill: #f2f0e9 }
.line { stroke: #e2dfd6; stroke-width: 1 }
.axis { stroke: #868d96; stroke-width: 1 }
.level { fill: none; stroke: #3f7d83; stroke-width: 1.75; stroke-linejoin: round }
.high { fill: #3f7d83; fill-opacity: .18 }
.word { fill: #3f7d83; fill-opacity: .16; stroke: #3f7d83; stroke-width: 1.25 }
.unknown { fill: url(#unknown-hatch); stroke: #b4532a; stroke-width: 1 }
.hatch { stroke: #c4622f; stroke-width: 2 }
.hatch-ground { fill: #c4622f; fill-opacity: .14 }
@media (prefers-color-scheme: dark) {
svg { background: #17191d }
.ground { fill: #17191d }
text { fill: #e4e2dc }
.quiet { fill: #a3a8af }
.value { fill: #bfe0e2 }
.band { fill: #1d2025 }
.line { stroke: #2c3036 }
.axis { stroke: #7c828b }
.level { stroke: #6bb0b5 }
.high { fill: #6bb0b5 }
.word { fill: #6bb0b5; stroke: #6bb0b5 }
.unknown { stroke: #e08455 }
.hatch { stroke: #e08455 }
.hatch-ground { fill: #e08455 }
}
`;

/** The colours and lettering of the picture, on a light and on a dark ground. */
export const STYLE = `
svg { background: #fbfaf7 }
.ground { fill: #fbfaf7 }
text { fill: #2c3138; font: 13px system-ui, sans-serif }
.title { font-size: 18px; font-weight: 600 }
.figure { font-weight: 600 }
.quiet { fill: #5d646d; font-size: 12px }
.line { stroke: #e2dfd6; stroke-width: 1 }
.mark { stroke: #868d96; stroke-width: 1.5; stroke-dasharray: 3 4 }
.bar { fill: #3f7d83; fill-opacity: .22 }
.wasm { fill: #3f7d83 }
.table { fill: #c4622f }
.native { fill: none; stroke: #2c3138; stroke-width: 2 }
.bytecode { fill: #868d96 }
.reference { fill: none; stroke: #868d96; stroke-width: 1.5 }
@media (prefers-color-scheme: dark) {
svg { background: #17191d }
.ground { fill: #17191d }
text { fill: #e4e2dc }
.quiet { fill: #a3a8af }
.line { stroke: #2c3036 }
.mark { stroke: #7c828b }
.bar { fill: #6bb0b5; fill-opacity: .26 }
.wasm { fill: #6bb0b5 }
.table { fill: #e08455 }
.native { stroke: #e4e2dc }
.bytecode { fill: #9aa0a8 }
.reference { stroke: #9aa0a8 }
}
`;

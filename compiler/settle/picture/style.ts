/**
 * The colours and lettering of the picture, on a light and on a dark ground.
 *
 * The two lines often run together: the wider one shows on both sides of the other.
 */
export const STYLE = `
svg { background: #fbfaf7 }
.ground { fill: #fbfaf7 }
text { fill: #2c3138; font: 13px system-ui, sans-serif }
.title { font-size: 18px; font-weight: 600 }
.quiet { fill: #5d646d; font-size: 12px }
.line { stroke: #e2dfd6; stroke-width: 1 }
.axis { stroke: #868d96; stroke-width: 1 }
.mark { stroke: #868d96; stroke-width: 1; stroke-dasharray: 3 4 }
.unknown { fill: #3f7d83; fill-opacity: .28 }
.differing { fill: #c4622f; fill-opacity: .32 }
.unknown.edge, .differing.edge { fill: none; stroke-linejoin: round }
.unknown.edge { stroke: #3f7d83; stroke-width: 4 }
.differing.edge { stroke: #b4532a; stroke-width: 1.5 }
@media (prefers-color-scheme: dark) {
svg { background: #17191d }
.ground { fill: #17191d }
text { fill: #e4e2dc }
.quiet { fill: #a3a8af }
.line { stroke: #2c3036 }
.axis, .mark { stroke: #7c828b }
.unknown { fill: #6bb0b5 }
.differing { fill: #e08455 }
.unknown.edge { stroke: #6bb0b5 }
.differing.edge { stroke: #e08455 }
}
`;

/** The colours and lettering of a graph of states, on a light and on a dark ground. */
export const STYLE = `
svg { background: #fbfaf7 }
.ground { fill: #fbfaf7 }
text { fill: #2c3138; font-family: system-ui, sans-serif }
.title { font-size: 18px; font-weight: 600 }
.quiet { fill: #5d646d; font-size: 12px }
.cluster > path, .cluster > polygon { stroke: #e2dfd6; fill: none }
.cluster > text { font-weight: 600 }
.state > path, .state > polygon { stroke: #3f7d83; fill: #3f7d83; fill-opacity: .1; stroke-width: 1.25 }
.first > path, .first > polygon { fill-opacity: .2 }
.move > path { stroke: #868d96 }
.move > polygon { stroke: #868d96; fill: #868d96 }
.move > text { fill: #5d646d }
@media (prefers-color-scheme: dark) {
svg { background: #17191d }
.ground { fill: #17191d }
text { fill: #e4e2dc }
.quiet { fill: #a3a8af }
.cluster > path, .cluster > polygon { stroke: #2c3036 }
.state > path, .state > polygon { stroke: #6bb0b5; fill: #6bb0b5 }
.move > path { stroke: #7c828b }
.move > polygon { stroke: #7c828b; fill: #7c828b }
.move > text { fill: #a3a8af }
}
`;

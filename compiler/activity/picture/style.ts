/** The colours and lettering of an activity picture, on a light and on a dark ground. */
export const STYLE = `
svg { background: #fbfaf7 }
.ground { fill: #fbfaf7 }
text { fill: #2c3138; font: 13px system-ui, sans-serif }
.title { font-size: 18px; font-weight: 600 }
.quiet { fill: #5d646d; font-size: 12px }
.bed { fill: #f2f0e9 }
.heat { fill: #3f7d83; shape-rendering: crispEdges }
.axis { stroke: #868d96; stroke-width: 1 }
@media (prefers-color-scheme: dark) {
svg { background: #17191d }
.ground { fill: #17191d }
text { fill: #e4e2dc }
.quiet { fill: #a3a8af }
.bed { fill: #1d2025 }
.heat { fill: #6bb0b5 }
.axis { stroke: #7c828b }
}
`;

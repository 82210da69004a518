import { figure } from '../../report/figures.js';
import { escaped, round, tickStep } from '../../waveform/picture/svgText.js';
import type { ActivityGroup } from '../activityGroups.js';
import { STYLE } from './style.js';

/** What an activity picture shows. */
export interface ActivityCourseShown {
  readonly circuit: string;
  /** First cycle, and how many there are. */
  readonly first: number;
  readonly cycles: number;
  /** Cycles of each range but the last one, which may be shorter. */
  readonly width: number;
  /** Toggles of each group in each range. */
  readonly ranges: readonly Float64Array[];
  readonly groups: readonly ActivityGroup[];
}

/** Rows in a picture: of more, those with the most toggles. */
const MOST_ROWS = 40;

const TOP = 104;
const ROW = 22;
const CHART = 720;
const RIGHT = 96;
const LEAST_NAME = 90;
const MOST_NAME = 320;
const LETTER = 7.2;
const SHADES = 20;

interface Row {
  readonly group: ActivityGroup;
  /** Toggles for each net and cycle, range by range, and altogether. */
  readonly rates: readonly number[];
  readonly rate: number;
}

interface Frame {
  readonly left: number;
  readonly base: number;
  readonly most: number;
  readonly x: (cycle: number) => number;
}

/**
 * The activity of groups of nets over ranges of cycles as one SVG picture: a row for each group, the
 * darker (or, on a dark ground, the lighter) the more of its nets toggle in a cycle. The scale is of
 * square roots, so that little activity shows too. It carries its own light and dark colours, and no
 * script.
 */
export function activityPicture(shown: ActivityCourseShown): string {
  const { circuit, first, cycles, groups } = shown;
  const rows = rowsOf(shown);
  const longest = Math.max(0, ...rows.map(({ group }) => group.name.length));
  const left = Math.min(MOST_NAME, Math.max(LEAST_NAME, 24 + LETTER * longest)) + 12;
  const base = TOP + rows.length * ROW;
  const frame: Frame = {
    left,
    base,
    most: Math.max(...rows.flatMap(({ rates }) => rates), 0),
    x: (cycle) => left + ((cycle - first) / cycles) * CHART,
  };
  const [total, height] = [round(left + CHART + RIGHT), base + 60];
  const title = `Activity of ${circuit}`;
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${total} ${height}" width="${total}" height="${height}" role="img" aria-labelledby="activity-title activity-description">
<title id="activity-title">${escaped(title)}</title>
<desc id="activity-description">${escaped(description(shown, rows))}</desc>
<style>${STYLE}</style>
<rect class="ground" width="${total}" height="${height}"/>
<text class="title" x="24" y="34">${escaped(title)}</text>
<text class="quiet" x="24" y="55">${escaped(caption(shown, rows.length, groups.length))}</text>
${legend(frame)}
<text class="quiet" x="${round(left + CHART + 10)}" y="${TOP - 10}">average</text>
${rows.map((row, i) => rowText(shown, row, TOP + i * ROW, frame)).join('\n')}
${axis(shown, frame)}
</svg>
`;
}

function rowsOf({ width, cycles, ranges, groups }: ActivityCourseShown): Row[] {
  const all = groups.map((group, i): Row => {
    const perRange = ranges.map((range, at) => {
      const length = Math.min(width, cycles - at * width);
      return range[i]! / (group.netCount * length);
    });
    const sum = ranges.reduce((total, range) => total + range[i]!, 0);
    return { group, rates: perRange, rate: sum / (group.netCount * cycles) };
  });
  if (all.length <= MOST_ROWS) return all;
  const chosen = new Set([...all].sort((p, q) => q.rate - p.rate).slice(0, MOST_ROWS));
  return all.filter((row) => chosen.has(row));
}

function caption(
  { width, first, cycles }: ActivityCourseShown,
  shown: number,
  all: number,
): string {
  const range = width === 1 ? 'cycle by cycle' : `in ranges of ${figure(width)} cycles`;
  const chosen = shown < all ? `, the ${shown} most active of ${figure(all)}` : '';
  return `cycles ${figure(first)} to ${figure(first + cycles - 1)}, ${range}${chosen}`;
}

function description(shown: ActivityCourseShown, rows: readonly Row[]): string {
  const [busiest] = rows.toSorted((p, q) => q.rate - p.rate);
  const most =
    busiest && ` The most active one is ${busiest.group.name}: ${rateText(busiest.rate)}.`;
  return (
    `Toggles for each net and cycle of ${rows.length} groups of nets, ` +
    `${caption(shown, rows.length, shown.groups.length)}.${most ?? ''}`
  );
}

function legend({ left, most }: Frame): string {
  const samples = [0, 0.25, 0.5, 0.75, 1].map((part) => {
    const x = left + part * 180;
    const opacity = opacityOf(part * most, most);
    return (
      `<rect class="bed" x="${round(x)}" y="68" width="45" height="12"/>` +
      `<rect class="heat" x="${round(x)}" y="68" width="45" height="12" fill-opacity="${opacity}"/>`
    );
  });
  const text = `0 to ${rateText(most)} toggles for each net and cycle`;
  return `${samples.join('')}<text class="quiet" x="${round(left + 236)}" y="78">${text}</text>`;
}

function rowText(
  { first, width, cycles }: ActivityCourseShown,
  { group, rates, rate }: Row,
  top: number,
  { left, most, x }: Frame,
): string {
  const letters = Math.floor((left - 36) / LETTER);
  const { name, netCount } = group;
  // The end of a hierarchical name tells more than its beginning.
  const label = name.length > letters ? `…${name.slice(name.length - letters + 1)}` : name;
  const nets = `${figure(netCount)} ${netCount === 1 ? 'net' : 'nets'}`;
  const place = round(top + ROW / 2 + 4.5);
  const parts = [
    `<text x="${round(left - 12)}" y="${place}" text-anchor="end">${escaped(label)}<title>${escaped(`${name}: ${nets}`)}</title></text>`,
    `<rect class="bed" x="${round(left)}" y="${round(top + 2)}" width="${CHART}" height="${ROW - 4}"/>`,
  ];
  const shades = rates.map((each) => opacityOf(each, most));
  for (let from = 0, to = 0; from < rates.length; from = to) {
    while (to < rates.length && shades[to] === shades[from]) to++;
    if (shades[from] === 0) continue;
    const start = x(first + from * width);
    const end = x(first + Math.min(cycles, to * width));
    parts.push(
      `<rect class="heat" x="${round(start)}" y="${round(top + 2)}" width="${round(end - start)}" height="${ROW - 4}" fill-opacity="${shades[from]}"/>`,
    );
  }
  parts.push(
    `<text class="quiet" x="${round(left + CHART + 10)}" y="${place}">${rateText(rate)}</text>`,
  );
  return parts.join('');
}

/** In steps, so that ranges that look alike are drawn as one. */
const opacityOf = (rate: number, most: number): number =>
  most === 0 ? 0 : Math.ceil(SHADES * Math.sqrt(rate / most)) / SHADES;

function axis({ first, cycles }: ActivityCourseShown, { base, left, x }: Frame): string {
  const step = tickStep(cycles, 8);
  const marks: string[] = [];
  for (let cycle = Math.ceil(first / step) * step; cycle <= first + cycles; cycle += step) {
    const at = round(x(cycle));
    marks.push(
      `<line class="axis" x1="${at}" y1="${base + 4}" x2="${at}" y2="${base + 9}"/>` +
        `<text class="quiet" x="${at}" y="${base + 24}" text-anchor="middle">${figure(cycle)}</text>`,
    );
  }
  const [from, to] = [round(left), round(left + CHART)];
  return [
    `<line class="axis" x1="${from}" y1="${base + 4}" x2="${to}" y2="${base + 4}"/>`,
    ...marks,
    `<text class="quiet" x="${round(left + CHART / 2)}" y="${base + 46}" text-anchor="middle">cycle</text>`,
  ].join('\n');
}

const rateText = (rate: number): string => (rate === 0 ? '0' : `${Number(rate.toPrecision(3))}`);

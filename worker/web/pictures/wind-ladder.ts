/** Wind ladder: height against the wind along the launch axis, one hour, one signed axis, with trim speed as a fence. */
import { quantityFigure, quantityText } from '../../../lib/brief/units-out.ts';
import type { Reader } from '../../../lib/brief/words/index.ts';
import { html, px, type Html } from '../html.ts';
import type { LadderPicture, LadderRung } from '../page-services.ts';
import { extent, scaleOf } from './scale.ts';

const WIDTH = 360;
const HEIGHT = 250;
const TOP = 34;
const FOOT = 214;

function speed(mps: number, reader: Reader): string {
  return quantityFigure({ value: mps, unit: 'm/s' }, reader.units);
}

function height(m: number, reader: Reader): string {
  return quantityText({ value: m, unit: 'm' }, reader.units);
}

function rungWords(rung: LadderRung, reader: Reader): string {
  const along = quantityText({ value: Math.abs(rung.headMps), unit: 'm/s' }, reader.units);
  const across = quantityText({ value: Math.abs(rung.crossMps), unit: 'm/s' }, reader.units);
  const side = rung.crossMps < 0 ? 'left' : 'right';
  return `${height(rung.altitudeM, reader)}: ${along} ${rung.headMps < 0 ? 'from behind' : 'from ahead'}, ${across} from the ${side}`;
}

function ladderDescription(ladder: LadderPicture, reader: Reader): string {
  return `Launch at ${height(ladder.launchM, reader)}, trim airspeed ${quantityText({ value: ladder.trimMps, unit: 'm/s' }, reader.units)}. ${ladder.rungs.map((rung) => rungWords(rung, reader)).join('; ')}.`;
}

/** The part across has no place on the axis; it is written beside the rung, so that a strong one is not overlooked. */
function acrossLabel(rung: LadderRung, reader: Reader): Html | null {
  return Math.abs(rung.crossMps) < 0.5 ? null : html`<tspan class="faint"> and ${speed(Math.abs(rung.crossMps), reader)} across</tspan>`;
}

/** Heights whose labels do not run into one another, from the bottom up. */
function labelled(rungs: readonly LadderRung[], y: (altitudeM: number) => number): ReadonlySet<LadderRung> {
  const kept = new Set<LadderRung>();
  let last = Infinity;
  for (const rung of [...rungs].sort((a, b) => a.altitudeM - b.altitudeM)) {
    if (last - y(rung.altitudeM) < 15) continue;
    kept.add(rung);
    last = y(rung.altitudeM);
  }
  return kept;
}

function windLadder(ladder: LadderPicture, reader: Reader): Html {
  const rungs = ladder.rungs.filter((rung) => Number.isFinite(rung.altitudeM) && Number.isFinite(rung.headMps));
  const y = scaleOf(extent([ladder.launchM, ...rungs.map(({ altitudeM }) => altitudeM)]), [FOOT, TOP]);
  const [least, most] = extent([-3, ladder.trimMps + 2, ...rungs.map(({ headMps }) => headMps)]);
  const x = scaleOf([least, most], [76, WIDTH - 30]);
  const names = labelled(rungs, y);
  const path = rungs.map((rung, index) => `${index === 0 ? 'M' : 'L'}${px(x(rung.headMps))} ${px(y(rung.altitudeM))}`).join('');
  const fence = x(ladder.trimMps);
  return html`<svg class="view" role="img" aria-labelledby="ladder-t ladder-d" viewBox="0 0 ${WIDTH} ${HEIGHT}">
<title id="ladder-t">Wind ladder</title><desc id="ladder-d">${ladderDescription(ladder, reader)}</desc>
<path class="post" d="M${px(x(0))} ${TOP - 12}V${FOOT + 10}"/><path class="fence" d="M${px(fence - 2)} ${TOP - 12}V${FOOT + 10}M${px(fence + 2)} ${TOP - 12}V${FOOT + 10}"/>
<path class="sight" d="M62 ${px(y(ladder.launchM))}H${WIDTH - 8}"/><text class="lbl faint end" x="${WIDTH - 8}" y="${px(y(ladder.launchM) - 4)}">launch</text>
<path class="flown" d="${path}"/>${rungs.map((rung) => html`<path class="rung" d="M${px(x(0))} ${px(y(rung.altitudeM))}H${px(x(rung.headMps))}"/><circle class="mark" cx="${px(x(rung.headMps))}" cy="${px(y(rung.altitudeM))}" r="3"/>${names.has(rung) ? html`<text class="lbl end" x="58" y="${px(y(rung.altitudeM) + 4)}">${height(rung.altitudeM, reader)}</text><text class="lbl${rung.headMps < 0 ? ' end' : ''}" x="${px(x(rung.headMps) + (rung.headMps < 0 ? -7 : 7))}" y="${px(y(rung.altitudeM) + 4)}">${speed(rung.headMps, reader)}${acrossLabel(rung, reader)}</text>` : null}`)}
<text class="lbl mid" x="${px(x(0))}" y="${FOOT + 26}">0</text><text class="lbl mid" x="${px(fence)}" y="${FOOT + 26}">trim ${speed(ladder.trimMps, reader)}</text>
<text class="lbl faint end" x="${px(x(0) - 8)}" y="${TOP - 18}">from behind</text><text class="lbl faint" x="${px(x(0) + 8)}" y="${TOP - 18}">from ahead, ${reader.units.speed}</text></svg>`;
}

export function windLadderFigure(ladder: LadderPicture, reader: Reader): Html {
  return html`<figure><h3>Wind by height</h3>${windLadder(ladder, reader)}<figcaption>The part of the wind along the launch axis; the double line is trim airspeed.
<details><summary>The rungs in words</summary><ul>${ladder.rungs.map((rung) => html`<li>${rungWords(rung, reader)}</li>`)}</ul></details></figcaption></figure>`;
}

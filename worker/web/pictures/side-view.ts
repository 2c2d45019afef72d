/**
 * The glide from the side: the straight line from launch to landing, the computed path in still air and in the wind
 * and sink of the chosen hour, and the height on arrival. The ground between is not known, and the picture says so.
 */
import { quantityText } from '../../../lib/brief/units-out.ts';
import type { Reader } from '../../../lib/brief/words/index.ts';
import { html, px, type Html } from '../html.ts';
import type { GlidePicture, PathPoint } from '../page-services.ts';
import { extent, scaleOf, type Scale } from './scale.ts';

const WIDTH = 360;
const HEIGHT = 226;

function line(points: readonly PathPoint[], x: Scale, y: Scale): string {
  return points.map(({ alongM, altitudeM }, index) => `${index === 0 ? 'M' : 'L'}${px(x(alongM))} ${px(y(altitudeM))}`).join('');
}

function metres(value: number, reader: Reader): string {
  return quantityText({ value, unit: 'm' }, reader.units);
}

function arrivalWords(glide: GlidePicture, reader: Reader): string {
  if (glide.arrivalM === null) return 'does not arrive';
  return glide.arrivalM < 0 ? `ends ${metres(-glide.arrivalM, reader)} below the landing` : `arrives ${metres(glide.arrivalM, reader)} above the landing`;
}

function description(glide: GlidePicture, reader: Reader): string {
  const still = glide.stillAir.at(-1);
  const inStill = still === undefined ? '' : ` In still air the glide would be ${metres(still.altitudeM - glide.landingM, reader)} above the landing at its end.`;
  const asked = glide.askedM === null ? '' : ` The sheet asks ${metres(glide.askedM, reader)}.`;
  return `From the launch at ${metres(glide.launchM, reader)} to the landing at ${metres(glide.landingM, reader)}, ${Math.round(glide.distanceM)} m away, the glide ${arrivalWords(glide, reader)}.${asked}${inStill} The ground between is not known.`;
}

function sideView(glide: GlidePicture, reader: Reader): Html {
  const [low, high] = extent([glide.launchM, glide.landingM, ...glide.inWind.map(({ altitudeM }) => altitudeM), ...glide.stillAir.map(({ altitudeM }) => altitudeM)]);
  const x = scaleOf([0, glide.distanceM], [26, WIDTH - 74]);
  const y = scaleOf([low, high], [HEIGHT - 50, 30]);
  const [landX, landY] = [x(glide.distanceM), y(glide.landingM)];
  const asked = glide.askedM === null || glide.askedM <= 0 ? null
    : html`<rect class="edge-ochre" fill="url(#h-reserve)" x="${px(landX - 9)}" width="18" y="${px(y(glide.landingM + glide.askedM))}" height="${px(landY - y(glide.landingM + glide.askedM))}"/>`;
  const arrives = glide.arrivalM === null ? null
    : html`<path class="line" d="M${px(landX)} ${px(landY)}V${px(y(glide.landingM + glide.arrivalM))}"/><circle class="mark" cx="${px(landX)}" cy="${px(y(glide.landingM + glide.arrivalM))}" r="3.5"/>`;
  const labelY = glide.arrivalM === null ? HEIGHT / 2 - 20 : Math.min(Math.max(y(glide.landingM + glide.arrivalM) + 4, 16), HEIGHT - 56);
  const label = glide.arrivalM === null ? ['does not', 'arrive'] : [metres(Math.abs(glide.arrivalM), reader), glide.arrivalM < 0 ? 'below' : 'above'];
  return html`<svg class="view" role="img" aria-labelledby="side-t side-d" viewBox="0 0 ${WIDTH} ${HEIGHT}">
<title id="side-t">The glide from the side</title><desc id="side-d">${description(glide, reader)}</desc>
<path class="sight" d="M${px(x(0))} ${px(y(glide.launchM))}L${px(landX)} ${px(landY)}"/>${asked}
<path class="still" d="${line(glide.stillAir, x, y)}"/><path class="flown" d="${line(glide.inWind, x, y)}"/>${arrives}
<path class="post" d="M${px(x(0))} ${px(y(glide.launchM))}v9M${px(x(0) - 8)} ${px(y(glide.launchM) + 9)}h16"/><path class="post" d="M${px(landX - 14)} ${px(landY)}h28"/>
<text class="lbl" x="${px(x(0) - 8)}" y="${px(y(glide.launchM) - 8)}">launch ${metres(glide.launchM, reader)}</text>
<text class="lbl mid" x="${px(landX)}" y="${px(landY + 16)}">landing ${metres(glide.landingM, reader)}</text>
<text class="lbl big" x="${px(landX + 13)}" y="${px(labelY)}">${label[0] ?? ''}<tspan x="${px(landX + 13)}" dy="13">${label[1] ?? ''}</tspan></text>
<text class="lbl faint" x="14" y="${HEIGHT - 8}">Dashed: the straight line; the ground between is not known.</text></svg>`;
}

export function sideViewFigure(glide: GlidePicture, reader: Reader): Html {
  return html`<figure><h3>Glide to the landing</h3>${sideView(glide, reader)}<figcaption>${description(glide, reader)} Thin line: still air. Thick line: this hour.</figcaption></figure>`;
}

/**
 * The strip from above with the line laid from the recommended end, the wind's two components as arrows, and the place
 * where the released line falls; and the climb from the side.
 */
import { quantityText } from '../../../lib/brief/units-out.ts';
import { headingName, type Reader } from '../../../lib/brief/words/index.ts';
import { html, px, type Html } from '../html.ts';
import type { TowPicture } from '../page-services.ts';
import { scaleOf } from './scale.ts';

const WIDTH = 360;

function speed(mps: number, reader: Reader): string {
  return quantityText({ value: Math.abs(mps), unit: 'm/s' }, reader.units);
}

function height(m: number, reader: Reader): string {
  return quantityText({ value: m, unit: 'm' }, reader.units);
}

function windWords(tow: TowPicture, reader: Reader): string {
  const along = tow.headMps < 0 ? 'from behind' : 'from ahead';
  const across = tow.crossMps < 0 ? 'from the left' : 'from the right';
  return `wind ${speed(tow.headMps, reader)} ${along} and ${speed(tow.crossMps, reader)} ${across}`;
}

function driftWords(tow: TowPicture): string {
  if (tow.driftM === null) return 'Where the line falls is not known.';
  const side = tow.driftM < 0 ? 'right' : 'left';
  const clear = tow.lineClearM === null ? 'the clear width is not given' : `${Math.round(tow.lineClearM)} m are clear`;
  return `The released line falls ${Math.round(Math.abs(tow.driftM))} m to the ${side}; ${clear}.`;
}

function arrow(from: { readonly x: number; readonly y: number }, to: { readonly x: number; readonly y: number }): Html {
  const angle = Math.atan2(to.y - from.y, to.x - from.x);
  const barb = (turn: number) => `${px(to.x - 8 * Math.cos(angle + turn))} ${px(to.y - 8 * Math.sin(angle + turn))}`;
  return html`<path class="arrow" d="M${px(from.x)} ${px(from.y)}L${px(to.x)} ${px(to.y)}M${barb(0.45)}L${px(to.x)} ${px(to.y)}L${barb(-0.45)}"/>`;
}

/** The strip lies across the picture, the wing at the left, the winch at the right: the tow goes to the right. */
function stripFromAbove(tow: TowPicture, reader: Reader): Html {
  const [startX, winchX, middleY] = [40, WIDTH - 40, 88];
  const across = scaleOf([0, Math.max(60, tow.lineClearM ?? 0, Math.abs(tow.driftM ?? 0))], [0, 52]);
  const clear = tow.lineClearM === null ? null : html`<rect class="ground" x="${startX}" width="${winchX - startX}" y="${px(middleY - across(tow.lineClearM))}" height="${px(2 * across(tow.lineClearM))}"/>`;
  // A wind from the right (positive cross) blows the line to the left, which is up in the picture.
  const fallY = tow.driftM === null ? null : middleY - Math.sign(tow.driftM) * across(Math.abs(tow.driftM));
  const fall = fallY === null ? null : html`<path class="fallen" d="M${startX + 60} ${px(fallY)}H${winchX - 60}"/><text class="lbl mid" x="${WIDTH / 2}" y="${px(fallY + (fallY < middleY ? -6 : 14))}">line falls here</text>`;
  const reach = (mps: number) => Math.min(48, Math.max(12, Math.abs(mps) * 9));
  const head = tow.headMps >= 0 ? arrow({ x: startX + 8 + reach(tow.headMps), y: 22 }, { x: startX + 8, y: 22 }) : arrow({ x: startX + 8, y: 22 }, { x: startX + 8 + reach(tow.headMps), y: 22 });
  const crossX = winchX - 26;
  const cross = tow.crossMps >= 0 ? arrow({ x: crossX, y: 40 + reach(tow.crossMps) - 26 }, { x: crossX, y: 14 }) : arrow({ x: crossX, y: 14 }, { x: crossX, y: 40 + reach(tow.crossMps) - 26 });
  return html`<svg class="view" role="img" aria-labelledby="above-t above-d" viewBox="0 0 ${WIDTH} 176">
<title id="above-t">The strip from above</title><desc id="above-d">Tow along ${headingName(tow.headingDeg)}, line ${Math.round(tow.lineLengthM)} m, ${windWords(tow, reader)}. ${driftWords(tow)}</desc>
${clear}<path class="post" d="M${startX} ${middleY}H${winchX}"/><path class="mark" d="M${startX - 7} ${middleY}l10 -7v14z"/><rect class="mark" x="${winchX - 4}" y="${middleY - 6}" width="12" height="12"/>${fall}
${Math.abs(tow.headMps) < 0.05 ? null : head}<text class="lbl" x="${px(startX + 16 + reach(tow.headMps))}" y="26">${speed(tow.headMps, reader)}</text>
${Math.abs(tow.crossMps) < 0.05 ? null : cross}<text class="lbl end" x="${crossX - 8}" y="26">${speed(tow.crossMps, reader)}</text>
<text class="lbl" x="${startX - 26}" y="170">launch here, tow along ${headingName(tow.headingDeg)}</text><text class="lbl end" x="${WIDTH - 14}" y="170">winch</text></svg>`;
}

function climbSideView(tow: TowPicture, reader: Reader): Html {
  const top = Math.max(tow.releaseM, ...tow.climb.map(({ heightM }) => heightM), 1);
  const x = scaleOf([0, tow.lineLengthM], [40, WIDTH - 40]);
  const y = scaleOf([0, top], [160, 40]);
  const path = tow.climb.map(({ alongM, heightM }, index) => `${index === 0 ? 'M' : 'L'}${px(x(alongM))} ${px(y(heightM))}`).join('');
  const last = tow.climb.at(-1) ?? { alongM: 0, heightM: 0 };
  return html`<svg class="view" role="img" aria-labelledby="climb-t climb-d" viewBox="0 0 ${WIDTH} 190">
<title id="climb-t">The climb from the side</title><desc id="climb-d">Release at ${height(tow.releaseM, reader)} above the strip, ${Math.round(last.alongM)} m along a line of ${Math.round(tow.lineLengthM)} m.</desc>
<path class="post" d="M20 160H${WIDTH - 20}"/><path class="sight" d="M${px(x(last.alongM))} ${px(y(last.heightM))}L${px(x(tow.lineLengthM))} 160"/><path class="flown" d="${path}"/>
<circle class="mark" cx="${px(x(last.alongM))}" cy="${px(y(last.heightM))}" r="3.5"/><rect class="mark" x="${px(x(tow.lineLengthM) - 6)}" y="154" width="12" height="12"/>
<text class="lbl big mid" x="${px(x(last.alongM))}" y="${px(y(last.heightM) - 10)}">release ${height(tow.releaseM, reader)}</text><text class="lbl" x="20" y="180">start</text><text class="lbl end" x="${WIDTH - 20}" y="180">winch, ${Math.round(tow.lineLengthM)} m</text></svg>`;
}

export function stripFigures(tow: TowPicture, reader: Reader): Html {
  return html`<figure><h3>Strip from above</h3>${stripFromAbove(tow, reader)}<figcaption>Tow along ${headingName(tow.headingDeg)}: ${windWords(tow, reader)}. ${driftWords(tow)}</figcaption></figure>
<figure><h3>Climb</h3>${climbSideView(tow, reader)}<figcaption>Release expected at ${height(tow.releaseM, reader)} above the strip; dashed: the line at release.</figcaption></figure>`;
}

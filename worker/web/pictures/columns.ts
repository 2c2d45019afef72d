/**
 * Columns of airspeed: the picture of a day, and the only one over hours. Each hour is a column as tall as trim
 * airspeed; from the top it is spent: head wind, crab loss, gust, the reserve that the sheet demands. What is left at
 * the bottom is the spare, its number written in; a deficit hangs below the line. Widths are shares of the picture,
 * heights are pixels, so that the numbers keep their size on every screen.
 */
import type { AirspeedColumn, JudgedDay, JudgedHour } from '../../../lib/brief/day.ts';
import { quantityFigure, quantityText } from '../../../lib/brief/units-out.ts';
import { hourName, verdictPhrase, type Reader } from '../../../lib/brief/words/index.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { html, px, type Html } from '../html.ts';

export interface ColumnsSize {
  readonly pxPerMps: number;
  /** Largest drawn deficit; a larger one is cut, its number is not. */
  readonly deficitPx: number;
  /** Whether the numbers are written in. */
  readonly numbers: boolean;
}

export const LARGE: ColumnsSize = { pxPerMps: 20, deficitPx: 84, numbers: true };
export const SMALL: ColumnsSize = { pxPerMps: 7, deficitPx: 22, numbers: false };

/** One band of a column, in m/s above the line of nothing left. */
interface Band {
  readonly className: string;
  readonly fill: string | null;
  readonly fromMps: number;
  readonly toMps: number;
}

/** The bands of a column from the top down. A wind from behind is lent, not spent: the column begins above trim. */
function bandsOf(column: AirspeedColumn): Band[] {
  const parts = [
    { className: 'slate-fill', fill: null, mps: column.headMps },
    { className: 'edge-slate', fill: 'url(#h-crab)', mps: column.crabMps },
    { className: 'plum-fill', fill: null, mps: column.gustMps },
    { className: 'edge-ochre', fill: 'url(#h-reserve)', mps: column.reserveMps },
  ];
  let top = column.trimMps + Math.max(0, -column.headMps);
  const bands: Band[] = column.headMps < 0 ? [{ className: 'lent', fill: null, fromMps: column.trimMps, toMps: top }] : [];
  for (const { mps, ...look } of parts) {
    if (mps <= 0) continue;
    bands.push({ ...look, fromMps: top - mps, toMps: top });
    top -= mps;
  }
  return bands;
}

const VERDICT_HATCH: Readonly<Record<Verdict, string | null>> = { within: null, close: 'url(#h-close)', beyond: 'url(#h-beyond)', unknown: 'url(#h-unknown)' };

interface Frame {
  readonly size: ColumnsSize;
  /** Pixels from the top of the picture to the line. */
  readonly lineY: number;
  readonly count: number;
}

function slot(index: number, frame: Frame): { readonly x: string; readonly width: string; readonly middle: string } {
  const share = 100 / frame.count;
  return { x: `${px((index + 0.09) * share)}%`, width: `${px(0.82 * share)}%`, middle: `${px((index + 0.5) * share)}%` };
}

function unknownColumn(index: number, frame: Frame, trimMps: number): Html {
  const { x, width, middle } = slot(index, frame);
  const height = trimMps * frame.size.pxPerMps;
  const word = frame.size.numbers
    ? html`<svg x="${middle}" y="${px(frame.lineY - height / 2)}" overflow="visible"><text class="word" transform="rotate(-90)" dy=".35em">cannot say</text></svg>` : null;
  return html`<rect class="void" x="${x}" y="${px(frame.lineY - height)}" width="${width}" height="${px(height)}" fill="url(#h-unknown)"/>${word}`;
}

function bandRect(band: Band, place: { readonly x: string; readonly width: string }, frame: Frame): Html | null {
  const lowest = -frame.size.deficitPx / frame.size.pxPerMps;
  const from = Math.max(band.fromMps, lowest);
  const height = (band.toMps - from) * frame.size.pxPerMps;
  if (height <= 0) return null;
  const fill = band.fill === null ? null : html` fill="${band.fill}"`;
  return html`<rect class="${band.className}" x="${place.x}" y="${px(frame.lineY - band.toMps * frame.size.pxPerMps)}" width="${place.width}" height="${px(height)}"${fill}/>`;
}

function spareRect(hour: JudgedHour, spareMps: number, place: { readonly x: string; readonly width: string }, frame: Frame): Html | null {
  if (spareMps <= 0) return null;
  const hatch = VERDICT_HATCH[hour.verdict];
  const height = spareMps * frame.size.pxPerMps;
  const fill = hatch === null ? null : html` fill="${hatch}"`;
  return html`<rect class="spare" x="${place.x}" y="${px(frame.lineY - height)}" width="${place.width}" height="${px(height)}"${fill}/>`;
}

/** The number of the spare: at the foot of the column, or under a deficit. */
function numberText(spareMps: number, middle: string, frame: Frame, reader: Reader): Html | null {
  if (!frame.size.numbers) return null;
  const text = quantityFigure({ value: spareMps, unit: 'm/s' }, reader.units, 'down');
  const hang = Math.min(-spareMps * frame.size.pxPerMps, frame.size.deficitPx);
  const y = spareMps < 0 ? frame.lineY + hang + 14 : frame.lineY - 5;
  return html`<text class="${spareMps < 0 ? 'num short' : 'num'}" x="${middle}" y="${px(y)}">${text}</text>`;
}

function spentColumn(hour: JudgedHour, column: AirspeedColumn, index: number, frame: Frame, reader: Reader): Html {
  const place = slot(index, frame);
  const height = column.trimMps * frame.size.pxPerMps;
  const outline = html`<rect class="edge" x="${place.x}" y="${px(frame.lineY - height)}" width="${place.width}" height="${px(height)}"/>`;
  if (column.spareMps === null) {
    const word = frame.size.numbers ? html`<text class="num short" x="${place.middle}" y="${px(frame.lineY + 14)}">none</text>` : null;
    return html`<rect class="edge" x="${place.x}" y="${px(frame.lineY - height)}" width="${place.width}" height="${px(height)}" fill="url(#h-beyond)"/>${word}`;
  }
  return html`${bandsOf(column).map((band) => bandRect(band, place, frame))}${spareRect(hour, column.spareMps, place, frame)}${outline}${numberText(column.spareMps, place.middle, frame, reader)}`;
}

/** "6 h 1.3 m/s short": what the column of an hour says. */
function hourWords(hour: JudgedHour, day: JudgedDay, reader: Reader): string {
  const name = hourName(hour.validAt, day.timeZone);
  const column = hour.airspeed;
  if (column === null) return `${name} ${verdictPhrase(hour.verdict)}, spare not known`;
  if (column.spareMps === null) return `${name} ${verdictPhrase(hour.verdict)}, nothing left`;
  const size = { value: Math.abs(column.spareMps), unit: 'm/s' };
  const spare = column.spareMps < 0 ? `${quantityText(size, reader.units, 'up')} short` : `${quantityText(size, reader.units, 'down')} spare`;
  return `${name} ${verdictPhrase(hour.verdict)}, ${spare}`;
}

/** The picture as words, the same data in the same order. */
function columnsDescription(day: JudgedDay, reader: Reader): string {
  return `${day.hours.map((hour) => hourWords(hour, day, reader)).join('; ')}.`;
}

function largest(values: readonly number[], floor: number): number {
  return values.reduce((most, value) => (Number.isFinite(value) && value > most ? value : most), floor);
}

export function columnsPicture(day: JudgedDay, reader: Reader, options: { readonly size: ColumnsSize; readonly id: string }): Html {
  const { size, id } = options;
  const columns = day.hours.map((hour) => hour.airspeed).filter((column) => column !== null);
  const trimMps = largest(columns.map((column) => column.trimMps + Math.max(0, -column.headMps)), 0) || 10;
  const shortMps = largest(columns.map((column) => -(column.spareMps ?? 0)), 0);
  const below = Math.min(shortMps * size.pxPerMps, size.deficitPx) + (size.numbers && columns.some((column) => (column.spareMps ?? -1) < 0) ? 20 : 3);
  const frame: Frame = { size, lineY: Math.ceil(trimMps * size.pxPerMps) + 4, count: Math.max(1, day.hours.length) };
  const height = Math.ceil(frame.lineY + below);
  const drawn = day.hours.map((hour, index) => hour.airspeed === null
    ? unknownColumn(index, frame, trimMps)
    : spentColumn(hour, hour.airspeed, index, frame, reader));
  return html`<svg class="columns" role="img" aria-labelledby="${id}-t ${id}-d" width="100%" height="${height}">
<title id="${id}-t">Columns of airspeed, hour by hour</title><desc id="${id}-d">${columnsDescription(day, reader)}</desc>
${drawn}<line class="line" x1="0" x2="100%" y1="${px(frame.lineY)}" y2="${px(frame.lineY)}"/></svg>`;
}

/**
 * Columns of airspeed: the picture of a day, and the only one over hours. Each hour is a column as tall as trim
 * airspeed; from the top it is spent: head wind, crab loss, gust, the reserve that the sheet demands. What is left at
 * the bottom is the spare, its number written in; a deficit hangs below the line. Widths are shares of the picture,
 * heights are pixels, so that the numbers keep their size on every screen. All boxes of one look are one path, not a
 * shape an hour: a phone has its first view sooner.
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

type Hatch = 'crab' | 'reserve' | 'close' | 'beyond' | 'unknown';

/** One band of a column, in m/s above the line of nothing left. */
interface Band {
  readonly className: string;
  readonly hatch: Hatch | null;
  readonly fromMps: number;
  readonly toMps: number;
}

/** The bands of a column from the top down. A wind from behind is lent, not spent: the column begins above trim. */
function bandsOf(column: AirspeedColumn): Band[] {
  const parts: readonly { readonly className: string; readonly hatch: Hatch | null; readonly mps: number }[] = [
    { className: 'slate-fill', hatch: null, mps: column.headMps },
    { className: 'edge-slate', hatch: 'crab', mps: column.crabMps },
    { className: 'plum-fill', hatch: null, mps: column.gustMps },
    { className: 'edge-ochre', hatch: 'reserve', mps: column.reserveMps },
  ];
  let top = column.trimMps + Math.max(0, -column.headMps);
  const bands: Band[] = column.headMps < 0 ? [{ className: 'lent', hatch: null, fromMps: column.trimMps, toMps: top }] : [];
  for (const { mps, ...look } of parts) {
    if (mps <= 0) continue;
    bands.push({ ...look, fromMps: top - mps, toMps: top });
    top -= mps;
  }
  return bands;
}

const VERDICT_HATCH: Readonly<Record<Verdict, Hatch | null>> = { within: null, close: 'close', beyond: 'beyond', unknown: 'unknown' };

interface Frame {
  readonly size: ColumnsSize;
  /** Pixels from the top of the picture to the line. */
  readonly lineY: number;
  readonly count: number;
}

/** Width of the place of an hour, in the units of the paths; they are stretched to the width of the picture. */
const SLOT = 100;

/** The boxes of a picture: one path for each look, one for each hatch, across all hours. */
class Boxes {
  readonly looks = new Map<string, string>();
  readonly hatches = new Map<Hatch, string>();

  add(index: number, box: { readonly className: string; readonly hatch: Hatch | null; readonly y: number; readonly height: number }): void {
    const path = `M${index * SLOT + 9} ${px(box.y)}h82v${px(box.height)}h-82z`;
    this.looks.set(box.className, (this.looks.get(box.className) ?? '') + path);
    if (box.hatch !== null) this.hatches.set(box.hatch, (this.hatches.get(box.hatch) ?? '') + path);
  }
}

function middleOf(index: number, frame: Frame): string {
  return `${px((index + 0.5) * (100 / frame.count))}%`;
}

function addBand(boxes: Boxes, index: number, band: Band, frame: Frame): void {
  const lowest = -frame.size.deficitPx / frame.size.pxPerMps;
  const height = (band.toMps - Math.max(band.fromMps, lowest)) * frame.size.pxPerMps;
  if (height > 0) boxes.add(index, { ...band, y: frame.lineY - band.toMps * frame.size.pxPerMps, height });
}

/** The boxes of an hour; whole: a column that is not spent in parts, because nothing is left or nothing is known. */
function addColumn(boxes: Boxes, hour: JudgedHour, index: number, frame: Frame, trimMps: number): void {
  const column = hour.airspeed;
  const whole = (mps: number) => ({ y: frame.lineY - mps * frame.size.pxPerMps, height: mps * frame.size.pxPerMps });
  if (column === null) return boxes.add(index, { className: 'void', hatch: 'unknown', ...whole(trimMps) });
  if (column.spareMps === null) return boxes.add(index, { className: 'edge', hatch: 'beyond', ...whole(column.trimMps) });
  for (const band of bandsOf(column)) addBand(boxes, index, band, frame);
  if (column.spareMps > 0) boxes.add(index, { className: 'spare', hatch: VERDICT_HATCH[hour.verdict], ...whole(column.spareMps) });
  boxes.add(index, { className: 'edge', hatch: null, ...whole(column.trimMps) });
}

/** The order of drawing: fills, edges of bands, then the outlines. */
const LOOKS = ['slate-fill', 'plum-fill', 'edge-slate', 'edge-ochre', 'spare', 'edge', 'void', 'lent'];

/** A hatch keeps its shape on every screen: it fills the picture and is cut to its boxes, which are stretched. */
function draw(boxes: Boxes, frame: Frame, height: number, id: string): Html {
  const width = frame.count * SLOT;
  const hatches = [...boxes.hatches].map(([hatch, d]) => html`<clipPath id="${id}-${hatch}" clipPathUnits="objectBoundingBox"><path transform="scale(${(1 / width).toPrecision(5)} ${(1 / height).toPrecision(5)})" d="${d}"/></clipPath><rect width="100%" height="100%" fill="url(#h-${hatch})" clip-path="url(#${id}-${hatch})"/>`);
  const paths = LOOKS.map((look) => {
    const d = boxes.looks.get(look);
    return d === undefined ? null : html`<path class="${look}" d="${d}"/>`;
  });
  return html`${hatches}<svg viewBox="0 0 ${width} ${height}" width="100%" height="100%" preserveAspectRatio="none">${paths}</svg>`;
}

/** The number of the spare: at the foot of the column, or under a deficit. */
function numberText(spareMps: number, middle: string, frame: Frame, reader: Reader): Html {
  const text = quantityFigure({ value: spareMps, unit: 'm/s' }, reader.units, 'down');
  const hang = Math.min(-spareMps * frame.size.pxPerMps, frame.size.deficitPx);
  const y = spareMps < 0 ? frame.lineY + hang + 14 : frame.lineY - 5;
  return html`<text class="${spareMps < 0 ? 'num short' : 'num'}" x="${middle}" y="${px(y)}">${text}</text>`;
}

function columnText(hour: JudgedHour, index: number, frame: Frame, trimMps: number, reader: Reader): Html | null {
  if (!frame.size.numbers) return null;
  const middle = middleOf(index, frame);
  const column = hour.airspeed;
  if (column === null) return html`<svg x="${middle}" y="${px(frame.lineY - (trimMps * frame.size.pxPerMps) / 2)}" overflow="visible"><text class="word" transform="rotate(-90)" dy=".35em">cannot say</text></svg>`;
  if (column.spareMps === null) return html`<text class="num short" x="${middle}" y="${px(frame.lineY + 14)}">none</text>`;
  return numberText(column.spareMps, middle, frame, reader);
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
  const boxes = new Boxes();
  for (const [index, hour] of day.hours.entries()) addColumn(boxes, hour, index, frame, trimMps);
  const texts = day.hours.map((hour, index) => columnText(hour, index, frame, trimMps, reader));
  return html`<svg class="columns" role="img" aria-labelledby="${id}-t ${id}-d" width="100%" height="${height}">
<title id="${id}-t">Columns of airspeed, hour by hour</title><desc id="${id}-d">${columnsDescription(day, reader)}</desc>
${draw(boxes, frame, height, id)}<line class="line" x1="0" x2="100%" y1="${px(frame.lineY)}" y2="${px(frame.lineY)}"/>${texts}</svg>`;
}

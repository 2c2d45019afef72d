/** The pictures of one hour: side view and wind ladder of a launch, strip and climb of a tow. */
import type { JudgedDay, JudgedHour } from '../../../lib/brief/day.ts';
import { plainText, speedToFlySentence, type Reader } from '../../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from '../html.ts';
import type { HourDetail } from '../page-services.ts';
import { sideViewFigure } from './side-view.ts';
import { heading, stripFigures } from './strip-view.ts';
import { windLadderFigure } from './wind-ladder.ts';

function headingLine(hour: JudgedHour): Piece {
  if (hour.heading === null) return null;
  return html`<p class="heading"><strong>Tow along ${heading(hour.heading.headingDeg)}.</strong> ${plainText(hour.heading.reason, 300)}</p>`;
}

export function hourPictures(day: JudgedDay, hour: JudgedHour, detail: HourDetail, reader: Reader): Html {
  const figures = [
    detail.glide === null ? null : sideViewFigure(detail.glide, reader),
    detail.tow === null ? null : stripFigures(detail.tow, reader),
    detail.ladder === null ? null : windLadderFigure(detail.ladder, reader),
  ];
  const advice = day.kind === 'launch' && hour.speedToFlyMps !== null ? html`<p class="advice">${speedToFlySentence(hour.speedToFlyMps, reader)}</p>` : null;
  const none = figures.every((figure) => figure === null) ? null : html`<div class="views">${figures}</div>`;
  return html`${headingLine(hour)}${none}${advice}`;
}

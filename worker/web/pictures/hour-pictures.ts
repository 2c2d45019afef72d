/** The pictures of one hour: side view and wind ladder of a launch, strip and climb of a tow. */
import type { JudgedDay, JudgedHour } from '../../../lib/brief/day.ts';
import { headingSentence, speedToFlySentence, sunSentence, type Reader } from '../../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from '../html.ts';
import type { HourDetail } from '../page-services.ts';
import { sideViewFigure } from './side-view.ts';
import { stripFigures } from './strip-view.ts';
import { windLadderFigure } from './wind-ladder.ts';

function headingLine(hour: JudgedHour, reader: Reader): Piece {
  return hour.heading === null ? null : html`<p class="heading">${headingSentence(hour.heading, reader)}</p>`;
}

export function hourPictures(day: JudgedDay, hour: JudgedHour, detail: HourDetail, reader: Reader): Html {
  const figures = [
    detail.glide === null ? null : sideViewFigure(detail.glide, reader),
    detail.tow === null ? null : stripFigures(detail.tow, reader),
    detail.ladder === null ? null : windLadderFigure(detail.ladder, reader),
  ];
  const advice = day.kind === 'launch' && hour.speedToFlyMps !== null ? html`<p class="advice">${speedToFlySentence(hour.speedToFlyMps, reader)}</p>` : null;
  const none = figures.every((figure) => figure === null) ? null : html`<div class="views">${figures}</div>`;
  const sun = detail.sun === null ? null : html`<p class="advice">${sunSentence(detail.sun, hour.validAt, day)}</p>`;
  return html`${headingLine(hour, reader)}${none}${advice}${sun}`;
}

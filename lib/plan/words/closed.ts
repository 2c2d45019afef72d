/** Why an hour is not used, in words that carry no verdict of their own. */
import { causeClause } from '../../brief/words/causes.ts';
import { hourName, type Reader } from '../../brief/words/index.ts';
import type { Closed } from '../cells.ts';

/** "at 10 h thermals reach 1.4 m/s; the sheet allows 1.2", "the site closes". */
export function closedClause(closed: Closed, timeZone: string, reader: Reader): string {
  switch (closed.kind) {
    case 'group hours': return 'the group’s own hours end there';
    case 'site hours': return 'the site’s hours end there';
    case 'lost': return 'the hour after it was taken out by hand';
    case 'not judged': return 'nothing is judged there';
    case 'margin': {
      const at = `at ${hourName(closed.validAt, timeZone)}`;
      if (closed.margin === null) return `${at} nothing is known`;
      return `${at} ${causeClause(closed.margin, reader)}${closed.verdict === 'close' ? ', and the group takes no hours that are close' : ''}`;
    }
  }
}

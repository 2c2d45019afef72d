/** The page that judges a day again with the reader's own numbers. GET, since nothing is stored. */
import type { Context } from 'hono';
import { readOwnNumbers } from '../web/own-numbers.ts';
import type { WhatIfServices } from '../web/page-services.ts';
import { unitsFrom } from '../web/units-query.ts';
import { whatIfPage } from '../web/what-if-page.ts';
import { answer, asked, notFound } from './pages.ts';

export async function whatIf(services: WhatIfServices, c: Context): Promise<Response> {
  const typed = c.req.query();
  const units = unitsFrom(typed);
  const { numbers, problems } = readOwnNumbers(typed, units);
  const found = await services.whatIf({
    siteId: c.req.param('id') ?? '', date: asked(c, 'date'), wing: asked(c, 'wing'), sheet: asked(c, 'sheet'), hour: asked(c, 'hour'), numbers, problems,
  });
  if (found.kind !== 'answer') return notFound(c, found);
  const page = whatIfPage(found.day, found.answer, { reader: { units }, now: services.now(), hour: found.hour, given: found.given, typed });
  return answer(c, page, found.answer.kind === 'judged' ? 200 : 400);
}

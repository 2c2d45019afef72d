/** The catalogue: every word that a person reads in a brief, a page, a feed or a message comes from this folder. */
export { briefText, briefTitle, dayVerdict, inBriefOrder, siteBlock } from './brief.ts';
export { speedToFlySentence } from './advice.ts';
export { causeClause, causeSentence } from './causes.ts';
export { cautionSentence } from './cautions.ts';
export { ageName, clockTime, dateName, hourName, hourSpan, momentName } from './clock.ts';
export { CLOSING, EXPIRED } from './closing.ts';
export { INVENTED, dayStatement, daySentence, siteSentence } from './day-sentence.ts';
export { failureSentence } from './failures.ts';
export { fieldName, missingName, missingPhrase } from './fields.ts';
export { marginRow, spareText, type MarginRow } from './margin-row.ts';
export { limitOwner, limitSense, marginName } from './margins.ts';
export { notJudgedGroups, notJudgedSentence, type NotJudgedGroup } from './not-judged.ts';
export { capital, counted, listed, placeName, plainText, sentence } from './plain.ts';
export type { Language, Reader } from './reader.ts';
export { credits, disagreement, provenance, sourceName, votePhrase, voteSentence } from './sources.ts';
export { isOpen, mostRestrictive, restrictiveness, verdictPhrase } from './verdicts.ts';
export { windowException, windowSentence } from './windows.ts';

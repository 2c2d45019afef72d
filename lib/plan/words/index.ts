export { blockLastLaunch, blockPlace, blockReason, blockSentence, blockVerdict, blockWhere, moveWords, spareWords } from './blocks.ts';
export { turnedNotice } from './notice.ts';
export { asOfWords, eventTitle, groupName, ifLostSentence, leftOutSentence, nextBestSentence, noticeSentence, objectiveWords, planSentence, planTitle } from './plan.ts';

export {  blockPlace, blockReason, blockSentence,   moveWords,  } from './blocks.ts';
;
export {  eventTitle, groupName, ifLostSentence, leftOutSentence, nextBestSentence, noticeSentence,  planSentence, planTitle } from './plan.ts';

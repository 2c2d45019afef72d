// npm run accuracy: prints the accuracy table of the README.
import { accuracyReport } from './report.ts';
import { allTables } from './tables.ts';

console.log(accuracyReport(allTables));

import demoJson from '../config/demo.json' with { type: 'json' };
import sheetsJson from '../config/sheets.json' with { type: 'json' };
import sourcesJson from '../config/sources.json' with { type: 'json' };
import thresholdsJson from '../config/thresholds.json' with { type: 'json' };
import wingClassesJson from '../config/wing-classes.json' with { type: 'json' };
import { parseScenario } from '../lib/config/scenario.ts';
import { parseSourceOrder } from '../lib/config/source-order.ts';
import { parseSheets } from '../lib/config/sheet.ts';
import { parseThresholds } from '../lib/config/thresholds.ts';
import { parseWingClasses } from '../lib/config/wing-classes.ts';
import type { Issue, Result } from '../lib/result.ts';
import { readers } from './readers.ts';

/** The part of config/ that the worker carries with it, parsed when it is first needed and then kept. */
export const ownData = {
  wingClasses: once('wing-classes.json', () => parseWingClasses(wingClassesJson)),
  sheets: once('sheets.json', () => parseSheets(sheetsJson, { basis: 'required' })),
  sources: once('sources.json', () => parseSourceOrder(sourcesJson)),
  thresholds: once('thresholds.json', () => parseThresholds(thresholdsJson)),
  demo: once('demo.json', () => parseScenario(demoJson)),
};

export const ownReaders = readers(ownData.wingClasses);

/** It was checked when this was built: a fault in it is a bug of ours. */
function once<T>(file: string, read: () => Result<T, Issue[]>): () => T {
  let value: { readonly is: T } | undefined;
  return () => {
    if (value === undefined) {
      const result = read();
      if (!result.ok) throw new Error(`config/${file}: ${result.error.map((issue) => `${issue.path}: ${issue.problem}`).join('; ')}`);
      value = { is: result.value };
    }
    return value.is;
  };
}

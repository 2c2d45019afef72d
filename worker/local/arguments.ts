import { parseArgs } from 'node:util';

/** What `npm start -- …` was asked for. */
export interface StartOptions {
  readonly once: boolean;
  readonly live: boolean;
  /** The real adapters against stand-ins of the services on this machine. */
  readonly rehearse: boolean;
  /** A FeatureCollection. */
  readonly sitesFile: string | null;
  /** The id of a sheet of config/, or a file. */
  readonly sheet: string | null;
  readonly wing: string | null;
}

export const USAGE = `npm start                     the demo scenario: today's briefs with invented weather, then the pages
npm start -- --once           the same, then stop; ends with 1 when nothing could be judged
npm start -- --live           real forecasts for the sites of config/
npm start -- --rehearse       the same code for sites of a rehearsal, against stand-ins of the forecast services on this
                              machine: no network, invented weather
  --sites FILE                --live or --rehearse for the sites of a GeoJSON FeatureCollection
  --sheet ID|FILE             held to this limit sheet
  --wing CLASS                for this wing class: EN A, EN B, EN C, EN D or tandem`;

/** The options, or everything that is wrong with them. */
export function readArguments(args: readonly string[]): StartOptions | { readonly problems: readonly string[] } {
  let values: { once?: boolean; live?: boolean; rehearse?: boolean; sites?: string; sheet?: string; wing?: string };
  try {
    ({ values } = parseArgs({
      args: [...args],
      strict: true,
      allowPositionals: false,
      options: { once: { type: 'boolean' }, live: { type: 'boolean' }, rehearse: { type: 'boolean' }, sites: { type: 'string' }, sheet: { type: 'string' }, wing: { type: 'string' } },
    }));
  } catch (error) {
    // Node says which argument it does not know, in its first sentence.
    const [sentence] = (error instanceof Error ? error.message : String(error)).split('. ');
    return { problems: [sentence ?? 'the arguments cannot be read'] };
  }
  const { once = false, live = false, rehearse = false, sites = null, sheet = null, wing = null } = values;
  const problems = [
    ...(sites !== null && !live && !rehearse ? ['--sites needs --live or --rehearse: the demo has sites of its own'] : []),
    ...(live && rehearse ? ['--live asks the real services and --rehearse stand-ins: one of the two'] : []),
    ...Object.entries({ '--sites': sites, '--sheet': sheet, '--wing': wing }).filter(([, value]) => value === '').map(([name]) => `${name} is empty`),
  ];
  return problems.length > 0 ? { problems } : { once, live, rehearse, sitesFile: sites, sheet, wing };
}

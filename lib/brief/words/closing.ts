/** What stands under every brief and page. */
export const CLOSING = 'Computed from forecasts, not observed; local rules, site rules, instructor or tow master and the sky itself decide.';

/** In place of every verdict once the brief's time is over. */
export const EXPIRED = 'Expired: this brief is no longer valid and shows no verdict.';

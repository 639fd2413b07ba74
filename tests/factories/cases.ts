/** How many cases a property runs: TENDERLIGHT_CASES, else 1,000. */
export const CASES = Number.parseInt(process.env.TENDERLIGHT_CASES ?? '1000', 10);

import type { Clock } from './clock.ts';
import type { Config } from './config.ts';
import type { Db } from './db.ts';
import type { Facts } from './facts.ts';
import type { Logger } from './log.ts';

/** What every use case may rely on. Features that call outside add their gateway: `Deps & { stripe: … }`. */
export interface Deps {
  readonly db: Db;
  readonly clock: Clock;
  readonly facts: Facts;
  readonly log: Logger;
  readonly config: Config;
}

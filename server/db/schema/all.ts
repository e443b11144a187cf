import * as entries from './entries';
import * as housekeeping from './housekeeping';
import * as laboratory from './laboratory';
import * as notebooks from './notebooks';
import * as people from './people';
import * as signing from './signing';

/** Every table, for Drizzle's client and for better-auth's adapter. */
export const schema = { ...people, ...notebooks, ...laboratory, ...entries, ...signing, ...housekeeping };

import { customType } from 'drizzle-orm/pg-core';

/** Both drivers' binary (Buffer and Uint8Array) seen as Uint8Array. */
export const bytea = customType<{ data: Uint8Array; driverData: Uint8Array }>({
  dataType: () => 'bytea',
  fromDriver: (value) => new Uint8Array(value),
});

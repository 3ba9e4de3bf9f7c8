/** Column kinds that several subjects use. */
import { customType, timestamp, uuid } from 'drizzle-orm/pg-core';

export const bytea = customType<{ data: Uint8Array; driverData: Uint8Array }>({
	dataType: () => 'bytea',
	toDriver: (value) => Buffer.from(value.buffer, value.byteOffset, value.byteLength),
	fromDriver: (value) => value
});

/** Samples of one column of a trace, little-endian float64, whatever the machine. */
export const float64Column = customType<{ data: Float64Array; driverData: Uint8Array }>({
	dataType: () => 'bytea',
	toDriver: (value) => Buffer.from(value.buffer, value.byteOffset, value.byteLength),
	fromDriver: (value) => new Float64Array(value.buffer.slice(value.byteOffset, value.byteOffset + value.byteLength))
});

export const id = () => uuid('id').primaryKey().defaultRandom();
export const createdAt = () => timestamp('created_at', { withTimezone: true }).notNull().defaultNow();

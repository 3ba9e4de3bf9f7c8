/** Sign-in: the tables Auth.js keeps (database sessions), and the person's own settings. */
import { sql } from 'drizzle-orm';
import { check, index, integer, pgTable, primaryKey, text, timestamp, uniqueIndex } from 'drizzle-orm/pg-core';

export const users = pgTable(
	'user',
	{
		id: text('id')
			.primaryKey()
			.default(sql`gen_random_uuid()::text`),
		name: text('name'),
		email: text('email').notNull(),
		emailVerified: timestamp('email_verified', { withTimezone: true, mode: 'date' }),
		image: text('image'),
		/** `light`, `dark` or `system`: remembered per person. */
		theme: text('theme').notNull().default('system'),
		createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow()
	},
	(t) => [
		uniqueIndex('user_email_lower').on(sql`lower(${t.email})`),
		check('user_theme', sql`${t.theme} in ('system', 'light', 'dark')`)
	]
);

export const accounts = pgTable(
	'account',
	{
		userId: text('user_id')
			.notNull()
			.references(() => users.id, { onDelete: 'cascade' }),
		type: text('type').notNull(),
		provider: text('provider').notNull(),
		providerAccountId: text('provider_account_id').notNull(),
		refresh_token: text('refresh_token'),
		access_token: text('access_token'),
		expires_at: integer('expires_at'),
		token_type: text('token_type'),
		scope: text('scope'),
		id_token: text('id_token'),
		session_state: text('session_state')
	},
	(t) => [primaryKey({ columns: [t.provider, t.providerAccountId] }), index('account_user').on(t.userId)]
);

/** A signed-in browser. Not to be confused with a training session (`session`). */
export const authSessions = pgTable(
	'auth_session',
	{
		sessionToken: text('session_token').primaryKey(),
		userId: text('user_id')
			.notNull()
			.references(() => users.id, { onDelete: 'cascade' }),
		expires: timestamp('expires', { withTimezone: true, mode: 'date' }).notNull()
	},
	(t) => [index('auth_session_user').on(t.userId)]
);

export const verificationTokens = pgTable(
	'verification_token',
	{
		identifier: text('identifier').notNull(),
		token: text('token').notNull(),
		expires: timestamp('expires', { withTimezone: true, mode: 'date' }).notNull()
	},
	(t) => [primaryKey({ columns: [t.identifier, t.token] })]
);

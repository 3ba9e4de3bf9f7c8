/** Teams, the people in them, and people asked to join. */
import { sql } from 'drizzle-orm';
import { check, index, pgEnum, pgTable, text, timestamp, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { users } from './auth';
import { createdAt, id } from './columns';

export const roleEnum = pgEnum('role', ['owner', 'analyst', 'reviewer', 'contributor', 'reader']);

export const teams = pgTable(
	'team',
	{
		id: id(),
		name: text('name').notNull(),
		slug: text('slug').notNull().unique(),
		createdAt: createdAt()
	},
	(t) => [check('team_slug', sql`${t.slug} ~ '^[a-z0-9]+(-[a-z0-9]+)*$'`), check('team_name', sql`length(btrim(${t.name})) between 1 and 120`)]
);

export const members = pgTable(
	'member',
	{
		id: id(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		userId: text('user_id')
			.notNull()
			.references(() => users.id, { onDelete: 'cascade' }),
		role: roleEnum('role').notNull(),
		/** Two or three letters by which colleagues know the person. */
		initials: text('initials').notNull(),
		/** Set when the person left: what he or she wrote stays, the way in is closed. */
		leftAt: timestamp('left_at', { withTimezone: true }),
		createdAt: createdAt()
	},
	(t) => [
		unique('member_once_per_team').on(t.teamId, t.userId),
		unique('member_initials').on(t.teamId, t.initials),
		unique('member_team').on(t.teamId, t.id),
		index('member_user').on(t.userId),
		check('member_initials_form', sql`${t.initials} ~ '^[[:upper:][:digit:]]{1,4}$'`)
	]
);

export const invitations = pgTable(
	'invitation',
	{
		id: id(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		email: text('email').notNull(),
		role: roleEnum('role').notNull(),
		initials: text('initials').notNull(),
		invitedBy: text('invited_by')
			.notNull()
			.references(() => users.id),
		expiresAt: timestamp('expires_at', { withTimezone: true }).notNull(),
		acceptedAt: timestamp('accepted_at', { withTimezone: true }),
		createdAt: createdAt()
	},
	(t) => [uniqueIndex('invitation_open').on(t.teamId, sql`lower(${t.email})`).where(sql`${t.acceptedAt} is null`)]
);

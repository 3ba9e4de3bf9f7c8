/** Wearers, by pseudonym code only. Who a code stands for is not kept here. */
import { sql } from 'drizzle-orm';
import { check, foreignKey, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id } from './columns';
import { members, teams } from './team';

export const participants = pgTable(
	'participant',
	{
		id: id(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		code: text('code').notNull(),
		/** The member who wears (a contributor sees the sessions of this participant); null for others. */
		memberId: uuid('member_id'),
		createdAt: createdAt()
	},
	(t) => [
		unique('participant_code').on(t.teamId, t.code),
		unique('participant_team').on(t.teamId, t.id),
		foreignKey({ columns: [t.teamId, t.memberId], foreignColumns: [members.teamId, members.id], name: 'participant_member_same_team' }),
		check('participant_code_form', sql`${t.code} ~ '^[A-Z0-9][A-Z0-9-]{0,15}$'`)
	]
);

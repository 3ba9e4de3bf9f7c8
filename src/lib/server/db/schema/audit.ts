/** Who did what, when: entries are only ever added. */
import { bigserial, index, jsonb, pgTable, text, timestamp, uuid } from 'drizzle-orm/pg-core';
import { teams } from './team';

export const auditEntries = pgTable(
	'audit_entry',
	{
		id: bigserial('id', { mode: 'number' }).primaryKey(),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id, { onDelete: 'cascade' }),
		/** The person; null = the program itself. Kept as text so that the entry outlives the account. */
		actorId: text('actor_id'),
		actorInitials: text('actor_initials').notNull().default(''),
		/** `session.submitted`, `alignment.changed`, `member.role-changed`, … */
		action: text('action').notNull(),
		subjectType: text('subject_type').notNull(),
		subjectId: text('subject_id').notNull(),
		detail: jsonb('detail').$type<Record<string, unknown>>().notNull().default({}),
		at: timestamp('at', { withTimezone: true }).notNull().defaultNow()
	},
	(t) => [index('audit_team_time').on(t.teamId, t.at), index('audit_subject').on(t.subjectType, t.subjectId)]
);

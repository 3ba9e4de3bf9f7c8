/** Roles of a team and what each may do. Read by pages to show, and by the server to refuse. */
export const ROLES = ['owner', 'analyst', 'reviewer', 'contributor', 'reader'] as const;
export type Role = (typeof ROLES)[number];

export const ROLE_MEANING: Record<Role, string> = {
	owner: 'everything, and who is in the team',
	analyst: 'imports, aligns, tags, hands to review',
	reviewer: 'reads everything, vouches or hands back; never own work',
	contributor: 'uploads own recordings, sees own sessions',
	reader: 'reads figures and sessions'
};

/** Things that can be asked of the server. */
export type Act =
	| 'study.read'
	| 'study.edit'
	| 'plan.edit'
	| 'recording.upload'
	| 'session.read'
	| 'session.sort'
	| 'session.align'
	| 'session.annotate'
	| 'session.submit'
	| 'session.review'
	| 'agreement.read'
	| 'pairs.export'
	| 'member.read'
	| 'member.manage'
	| 'record.read';

const ACTS_OF: Record<Role, readonly Act[]> = {
	owner: [
		'study.read', 'study.edit', 'plan.edit', 'recording.upload', 'session.read', 'session.sort', 'session.align',
		'session.annotate', 'session.submit', 'session.review', 'agreement.read', 'pairs.export', 'member.read', 'member.manage', 'record.read'
	],
	analyst: [
		'study.read', 'study.edit', 'plan.edit', 'recording.upload', 'session.read', 'session.sort', 'session.align',
		'session.annotate', 'session.submit', 'session.review', 'agreement.read', 'pairs.export', 'member.read', 'record.read'
	],
	reviewer: ['study.read', 'session.read', 'session.review', 'agreement.read', 'pairs.export', 'member.read', 'record.read'],
	// A contributor sees only the sessions of the participant that is him or her: `ownSessionsOnly`.
	contributor: ['study.read', 'recording.upload', 'session.read'],
	reader: ['study.read', 'session.read', 'agreement.read', 'member.read']
};

/** May somebody of this role do this at all? Whose things they are is the query's business. */
export function may(role: Role, act: Act): boolean {
	return ACTS_OF[role].includes(act);
}

/** A contributor's sight ends at the sessions of the own participant code. */
export function ownSessionsOnly(role: Role): boolean {
	return role === 'contributor';
}

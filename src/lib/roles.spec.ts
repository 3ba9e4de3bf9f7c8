import { describe, expect, test } from 'vitest';
import { may, ownSessionsOnly, ROLE_MEANING, ROLES, type Act } from './roles';

const CHANGES: Act[] = ['study.edit', 'plan.edit', 'session.sort', 'session.align', 'session.annotate', 'session.submit', 'member.manage'];

describe('roles', () => {
	test('only owners change who is in the team', () => {
		expect(ROLES.filter((r) => may(r, 'member.manage'))).toEqual(['owner']);
	});
	test('a reader changes nothing', () => {
		for (const act of [...CHANGES, 'recording.upload', 'session.review'] as Act[]) expect(may('reader', act)).toBe(false);
	});
	test('a reviewer decides but does not align or tag', () => {
		expect(may('reviewer', 'session.review')).toBe(true);
		for (const act of CHANGES) expect(may('reviewer', act)).toBe(false);
	});
	test('a contributor uploads, sees own sessions only, and reads no figures of others', () => {
		expect(may('contributor', 'recording.upload')).toBe(true);
		expect(ownSessionsOnly('contributor')).toBe(true);
		expect(may('contributor', 'agreement.read')).toBe(false);
		expect(may('contributor', 'pairs.export')).toBe(false);
	});
	test('every role says in words what it may do', () => {
		for (const role of ROLES) expect(ROLE_MEANING[role].length).toBeGreaterThan(10);
	});
});

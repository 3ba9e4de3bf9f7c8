import { describe, expect, test } from 'vitest';
import { HOME, wayBack } from './way-back';

describe('the way back after signing in', () => {
	test('leads to the page that was asked for', () => {
		expect(wayBack('/studies/autumn-trail-study/agreement?device=1')).toBe('/studies/autumn-trail-study/agreement?device=1');
	});
	test.each(['//evil.example', '/\\evil.example', '/\t/evil.example', 'https://evil.example', 'javascript:alert(1)', '', null, undefined])('%j does not lead off this server', (wanted) => {
		expect(wayBack(wanted)).toBe(HOME);
	});
	test.each(['/signin?to=/signin', '/signout', '/auth/signin'])('%s does not lead round in a circle', (wanted) => {
		expect(wayBack(wanted)).toBe(HOME);
	});
});

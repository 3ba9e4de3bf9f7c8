import { describe, expect, test } from 'vitest';
import { demoAllowed } from './demo';

const local = (host: string, more: Record<string, string> = {}) => new Headers({ host, ...more });

describe('one-click sign-in', () => {
	test('works on this machine in demo mode', () => {
		expect(demoAllowed({ demo: true }, '127.0.0.1', local('127.0.0.1:4180'))).toBe(true);
		expect(demoAllowed({ demo: true }, '::ffff:127.0.0.1', local('localhost:4180'))).toBe(true);
		expect(demoAllowed({ demo: true }, '::1', local('[::1]:4180'))).toBe(true);
	});
	test('is refused without demo mode', () => {
		expect(demoAllowed({ demo: false }, '127.0.0.1', local('127.0.0.1:4180'))).toBe(false);
	});
	test('is refused from another machine, under another name, and through a proxy', () => {
		expect(demoAllowed({ demo: true }, '10.0.0.7', local('127.0.0.1:4180'))).toBe(false);
		expect(demoAllowed({ demo: true }, '127.0.0.1', local('nonius.example'))).toBe(false);
		expect(demoAllowed({ demo: true }, '127.0.0.1', local('127.0.0.1.nonius.example'))).toBe(false);
		expect(demoAllowed({ demo: true }, '127.0.0.1', local('127.0.0.1:4180', { 'x-forwarded-for': '10.0.0.7' }))).toBe(false);
	});
});

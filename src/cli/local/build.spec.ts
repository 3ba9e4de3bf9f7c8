import { mkdirSync, mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { fingerprint } from './build';

function project(): { root: string; put(path: string, text: string): void } {
	const root = mkdtempSync(join(tmpdir(), 'nonius-build-'));
	const put = (path: string, text: string) => {
		mkdirSync(join(root, path, '..'), { recursive: true });
		writeFileSync(join(root, path), text);
	};
	put('src/routes/(app)/+page.svelte', '<h1>Studies</h1>');
	put('static/mark.v1/icon.svg', '<svg/>');
	put('package-lock.json', '{}');
	return { root, put };
}

test.each([
	['a page', 'src/routes/(app)/+page.svelte', '<h1>Sessions</h1>'],
	['a new module', 'src/lib/charts/axis.ts', 'export {}'],
	['a picture in a folder with a dot', 'static/mark.v1/icon.svg', '<svg></svg>'],
	['the lock file', 'package-lock.json', '{"v":2}']
])('%s that changed is built again', (_what, path, text) => {
	const { root, put } = project();
	const before = fingerprint(root);
	put(path, text);
	expect(fingerprint(root)).not.toBe(before);
});

test('tests and commands are not in the build, so that editing them costs no build', () => {
	const { root, put } = project();
	const before = fingerprint(root);
	put('src/lib/charts/axis.spec.ts', 'export {}');
	put('src/cli/start.ts', 'export {}');
	expect(fingerprint(root)).toBe(before);
});

test('text that moves from one file to the next is a change', () => {
	const one = project();
	one.put('src/a.ts', 'xy');
	one.put('src/b.ts', '');
	const two = project();
	two.put('src/a.ts', 'x');
	two.put('src/b.ts', 'y');
	expect(fingerprint(one.root)).not.toBe(fingerprint(two.root));
});

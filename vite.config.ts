import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';

export default defineConfig({
	plugins: [tailwindcss(), sveltekit()],
	worker: { format: 'es' },
	test: {
		projects: [
			{
				extends: true,
				test: {
					name: 'unit',
					environment: 'node',
					include: ['src/**/*.spec.ts'],
					testTimeout: 30_000
				}
			},
			{
				extends: true,
				test: {
					name: 'integration',
					environment: 'node',
					include: ['tests/integration/**/*.spec.ts', 'tests/faults/**/*.spec.ts'],
					testTimeout: 60_000,
					hookTimeout: 60_000,
					fileParallelism: true,
					maxWorkers: 2
				}
			}
		]
	}
});

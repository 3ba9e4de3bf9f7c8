import adapter from '@sveltejs/adapter-node';
import { vitePreprocess } from '@sveltejs/vite-plugin-svelte';

/** @type {import('@sveltejs/kit').Config} */
const config = {
	preprocess: vitePreprocess(),
	compilerOptions: { runes: true },
	kit: {
		adapter: adapter({ out: 'build', precompress: false }),
		typescript: {
			config: (c) => {
				c.include.push('../drizzle.config.ts', '../playwright.config.ts', '../eslint.config.js');
			}
		}
	}
};
export default config;

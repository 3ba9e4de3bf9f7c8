/** Builds the two pages of the timeline's bench for production; the command line gives the folder. */
import { svelte, vitePreprocess } from '@sveltejs/vite-plugin-svelte';
import tailwindcss from '@tailwindcss/vite';
import { fileURLToPath } from 'node:url';

const here = (name) => fileURLToPath(new URL(name, import.meta.url));

export default {
	root: here('.'),
	logLevel: 'error',
	plugins: [tailwindcss(), svelte({ configFile: false, preprocess: vitePreprocess(), compilerOptions: { runes: true } })],
	worker: { format: 'es' },
	build: { emptyOutDir: true, target: 'es2022', rollupOptions: { input: { ours: here('ours.html'), rival: here('rival.html') } } }
};

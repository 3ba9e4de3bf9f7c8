/** Colours of the style sheet for canvases, which do not follow it by themselves: whoever reads one is run again when the theme changes. */
import { createSubscriber } from 'svelte/reactivity';

const MEDIA = ['(prefers-color-scheme: dark)', '(prefers-contrast: more)'];

class CanvasTokens {
	private known = new Map<string, string>();
	private subscribe = createSubscriber((update) => {
		const forget = () => {
			this.known.clear();
			update();
		};
		forget();
		const observer = new MutationObserver(forget);
		observer.observe(document.documentElement, { attributes: true, attributeFilter: ['data-theme', 'class'] });
		const queries = MEDIA.map((text) => window.matchMedia(text));
		for (const query of queries) query.addEventListener('change', forget);
		return () => {
			observer.disconnect();
			for (const query of queries) query.removeEventListener('change', forget);
		};
	});

	/** Value of a token such as `--t1`, as the page shows it now. */
	read(token: string): string {
		this.subscribe();
		let value = this.known.get(token);
		if (value === undefined) {
			value = getComputedStyle(document.documentElement).getPropertyValue(token).trim();
			this.known.set(token, value);
		}
		return value;
	}
}

export const canvasTokens = new CanvasTokens();

/** What has been started and must be stopped, last first, also when the stop comes in the middle of starting. */
export class RunningParts {
	#stops: (() => Promise<unknown>)[] = [];
	#ending: Promise<void> | null = null;

	/** Whether the stop has begun. */
	get ending(): boolean {
		return this.#ending !== null;
	}

	/**
	 * Starts a part. A stop that comes meanwhile waits for it, then stops it.
	 * @throws when the stop has begun already
	 */
	async start<T>(begin: () => Promise<T>, stop: (part: T) => unknown): Promise<T> {
		if (this.#ending) throw new Error('Everything is being stopped.');
		const part = begin();
		this.#stops.push(() => part.then(stop, () => undefined));
		return part;
	}

	/** Stops all of it, once, however often it is called. */
	stopAll(): Promise<void> {
		this.#ending ??= this.#stop();
		return this.#ending;
	}

	async #stop(): Promise<void> {
		for (const stop of this.#stops.reverse()) await stop();
	}
}

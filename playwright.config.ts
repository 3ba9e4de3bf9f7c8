import { defineConfig } from '@playwright/test';
import { CHROMIUM_FLAGS } from './src/cli/local/chromium';

export default defineConfig({
	testDir: 'tests/e2e',
	globalSetup: './tests/support/application.ts',
	// One application serves all journeys: they keep to studies and people of their own.
	workers: 1,
	fullyParallel: false,
	timeout: 90_000,
	expect: { timeout: 10_000 },
	outputDir: 'test-results',
	reporter: 'list',
	use: {
		browserName: 'chromium',
		viewport: { width: 1440, height: 900 },
		screenshot: 'only-on-failure',
		trace: 'off',
		acceptDownloads: true,
		actionTimeout: 15_000,
		launchOptions: { executablePath: process.env.NONIUS_CHROMIUM ?? '/usr/bin/chromium', args: CHROMIUM_FLAGS }
	}
});

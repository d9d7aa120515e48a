import { defineConfig } from '@playwright/test';

export default defineConfig({
	testDir: 'tests/browser',
	globalSetup: './tests/browser/global-setup.ts',
	outputDir: 'test-results',
	// One browser on two cores; the tests share one running application.
	workers: 1,
	fullyParallel: false,
	forbidOnly: true,
	timeout: 60_000,
	reporter: 'list',
	use: {
		// Set by the global set-up, in this process, before the test processes read this file.
		baseURL: process.env.ORIGIN,
		locale: 'en-GB',
		trace: 'retain-on-failure',
		launchOptions: {
			executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
			args: [
				'--no-sandbox',
				'--disable-background-networking',
				'--disable-component-update',
				'--disable-sync',
				'--disable-quic',
				'--no-first-run',
				'--disable-gpu'
			]
		}
	}
});

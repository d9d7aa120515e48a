import { svelte, vitePreprocess } from '@sveltejs/vite-plugin-svelte';
import tailwindcss from '@tailwindcss/vite';
import { mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { build, preview, type InlineConfig } from 'vite';

const root = fileURLToPath(new URL('../../..', import.meta.url));
const inRoot = (file: string) => path.join(root, file);

/** The page's own components, built as for production and served on loopback without the rest. */
export async function serveFrames(): Promise<{ url: string; close(): Promise<void> }> {
	const outDir = mkdtempSync(path.join(os.tmpdir(), 'bowkeeper-frames-'));
	const stubs = inRoot('tests/bench/frames/stubs.ts');
	const config: InlineConfig = {
		configFile: false,
		root,
		logLevel: 'error',
		plugins: [tailwindcss(), svelte({ preprocess: vitePreprocess(), configFile: false })],
		resolve: {
			alias: {
				$lib: inRoot('src/lib'),
				'$app/forms': stubs,
				'$app/navigation': stubs
			}
		},
		worker: { format: 'es' },
		build: {
			outDir,
			emptyOutDir: false,
			rollupOptions: { input: inRoot('tests/bench/frames/page.html') }
		}
	};
	await build(config);
	const server = await preview({
		...config,
		preview: { host: '127.0.0.1', port: 0, strictPort: false }
	});
	const origin = server.resolvedUrls?.local[0];
	if (!origin) throw new Error('the page is not served');
	return {
		url: new URL('tests/bench/frames/page.html', origin).href,
		async close() {
			await server.close();
			rmSync(outDir, { recursive: true });
		}
	};
}

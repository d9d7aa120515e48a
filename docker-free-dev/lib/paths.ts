import { createHash } from 'node:crypto';
import { existsSync, mkdirSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

/** The checkout that these tools belong to. */
export const projectRoot = path.resolve(fileURLToPath(import.meta.url), '../../..');

/** Everything that a start keeps between runs lies here; `npm run reset` drops it. */
export const localDir = path.join(projectRoot, '.local');

/** The file at `relative`, counted from the checkout. */
export function inProject(...relative: string[]): string {
	return path.join(projectRoot, ...relative);
}

/** Whether the checkout holds a file or folder at `relative`. */
export function hasInProject(...relative: string[]): boolean {
	return existsSync(inProject(...relative));
}

/**
 * Makes the folder for local data. Others may pass through it (the database server runs as a user of
 * its own when started by root) but not list it.
 */
export function makeLocalDir(): string {
	mkdirSync(localDir, { recursive: true, mode: 0o711 });
	return localDir;
}

/** A short name for this checkout, for folders outside of it. */
export function projectKey(): string {
	return createHash('sha256').update(projectRoot).digest('hex').slice(0, 12);
}

/** Arguments that make Node.js read TypeScript, wherever the process starts. */
export function typescriptArgs(): string[] {
	return ['--import', pathToFileURL(inProject('node_modules/tsx/dist/loader.mjs')).href];
}

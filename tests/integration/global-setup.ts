import { freshBuild } from '../../docker-free-dev/lib/build.ts';
import { startTestStack, testEnvironment } from '../../docker-free-dev/test-stack.ts';

/**
 * Database, mail catcher and doubles for all tests against them; the environment names them. The web
 * server is built here, before a test waits for it.
 */
export default async function setup(): Promise<() => Promise<void>> {
	await freshBuild(() => {});
	const stack = await startTestStack(false);
	Object.assign(process.env, testEnvironment(stack));
	return () => stack.stop();
}

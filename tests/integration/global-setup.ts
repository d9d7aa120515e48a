import { startTestStack, testEnvironment } from '../../docker-free-dev/test-stack.ts';

/** Database, mail catcher and doubles for all tests against them; the environment names them. */
export default async function setup(): Promise<() => Promise<void>> {
	const stack = await startTestStack(false);
	Object.assign(process.env, testEnvironment(stack));
	return () => stack.stop();
}

import { startTestStack, testEnvironment } from '../../docker-free-dev/test-stack.ts';

/** The whole application with its demo for the tests in a browser; the environment names it. */
export default async function setup(): Promise<() => Promise<void>> {
	const stack = await startTestStack(true);
	Object.assign(process.env, testEnvironment(stack));
	return () => stack.stop();
}

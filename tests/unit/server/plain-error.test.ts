import { DrizzleQueryError } from 'drizzle-orm';
import { expect, test } from 'vitest';
import { plainError } from '../../../src/lib/server/log';

const PERSON = 'juno.fell+bow@mail.example.org';

test('a failed statement is told without its parameters, with the code of the database', () => {
	const cause = Object.assign(new Error('duplicate key value'), {
		code: '23505',
		detail: `Key (email)=(${PERSON}) already exists.`
	});
	const error = new DrizzleQueryError(
		'insert into "user" values ($1, $2)',
		[PERSON, 'Juno'],
		cause
	);
	const plain = plainError(error);
	expect(plain.message).toBe('Failed query: insert into "user" values ($1, $2)');
	expect(plain.code).toBe('23505');
	expect(plain.stack).toContain('plain-error.test');
	expect(JSON.stringify(plain)).not.toContain('Juno');
	expect(JSON.stringify(plain)).not.toContain(PERSON);
});

test('an address in a message is blotted out, in the stack as well', () => {
	const refused = new Error(`451 <${PERSON}> is not taken, nor is (${PERSON})`);
	const plain = plainError(new Error(`to=${PERSON}: refused`, { cause: refused }));
	expect(plain.message).toBe('to=[address]: refused');
	expect(JSON.stringify(plain)).not.toContain('juno');
	expect(plainError(refused).message).toBe('451 <[address]> is not taken, nor is ([address])');
});

test('what is thrown and is no error says nothing', () => {
	expect(plainError(PERSON)).toEqual({ type: 'string', message: 'not an error' });
	expect(plainError(undefined).type).toBe('undefined');
});

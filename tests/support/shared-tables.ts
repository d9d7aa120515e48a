/**
 * The tables that hold rows of no operator, and why each may stand outside of row-level security.
 * Every other table is isolated.
 */
export const SHARED_TABLES: Record<string, string> = {
	user: 'an account is its person’s and may hold roles at several operators',
	session: 'belongs to an account; read by the hash of a secret',
	recovery_code: 'belongs to an account; read by the hash of a secret',
	user_token: 'belongs to an account; read by the hash of a secret',
	sign_up: 'there is no account yet; read by the hash of a secret',
	rate_limit: 'counters under hashed keys, no personal data'
};

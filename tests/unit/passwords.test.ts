import { expect, test } from 'vitest';
import { isCommonPassword } from '../../src/lib/server/auth/common-passwords';
import { hashPassword, mustBeGoodPassword, passwordMatches } from '../../src/lib/server/auth/password';
import { benchWordList } from '../../src/lib/server/accounts/bench-word-list';
import { initialsOf } from '../../src/lib/server/accounts/initials';
import { localPathOf } from '../../src/lib/server/local-path';

const email = 'ruth.osei@harrow-point.example';
const complaint = (password: string) => {
	try {
		mustBeGoodPassword(password, email);
		return null;
	} catch (thrown) {
		return (thrown as Error).message;
	}
};

test.each([
	['elevenchars', '11 characters. Use at least 12.'],
	['ruth.osei@harrow-point.example', 'This is close to your e-mail address. Choose something else.'],
	['ruth.osei1234', 'This is close to your e-mail address. Choose something else.']
])('%s: %s', (password, said) => expect(complaint(password)).toBe(said));

test.each([
	'password1234',
	'Passw0rd!2026',
	'qwertyuiop12',
	'123456789012',
	'aaaaaaaaaaaa',
	'abcabcabcabc',
	'letmeinletmein',
	'chemistrylab1',
	'welcome2026!!',
	'zxcvbnm12345'
])('%s is among the first that are tried', (password) =>
	expect(complaint(password)).toMatch(/^Many people use this one/)
);

test.each([
	'copper rowan tide ladder',
	'vier unterschiedliche wörter',
	'correct-horse-lamp',
	'x7#kQ9!mZp2@',
	'氷の上を歩く猫がいますよね'
])('%s will do', (password) => expect(complaint(password)).toBeNull());

test('common is ruled by what is left without digits and signs', () => {
	expect(isCommonPassword('!!!monkey!!!99')).toBe(true);
	expect(isCommonPassword('monkey wrench bay')).toBe(false);
});

test('a password matches however a keyboard composes it, and nothing else does', async () => {
	const stored = await hashPassword('caf\u00e9 au lait noir');
	expect(stored).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
	expect(await passwordMatches(stored, 'cafe\u0301 au lait noir')).toBe(true);
	expect(await passwordMatches(stored, 'Caf\u00e9 au lait noir')).toBe(false);
	expect(await passwordMatches(null, 'no account has this one')).toBe(false);
	expect(await hashPassword('caf\u00e9 au lait noir')).not.toBe(stored);
});

test('bench words: at least 512, each once, short enough to say', () => {
	expect(benchWordList.length).toBeGreaterThanOrEqual(512);
	expect(new Set(benchWordList).size).toBe(benchWordList.length);
	expect(benchWordList.filter((word) => !/^[a-z]{3,9}$/.test(word))).toEqual([]);
});

test.each([
	['Ruth Osei', 'R.O.'],
	['Ana María de la Cruz', 'A.C.'],
	['Sukarno', 'S.'],
	['  émile   zola ', 'É.Z.'],
	['李 小龙', '李.小.']
])('initials of %s are %s', (name, initials) => expect(initialsOf(name)).toBe(initials));

test.each([
	['/c/pc310?x=1#s-3', '/c/pc310?x=1#s-3'],
	['//elsewhere.example/x', '/now'],
	['/\\elsewhere.example', '/now'],
	['https://elsewhere.example', '/now'],
	['javascript:alert(1)', '/now'],
	['/\t/elsewhere.example', '/now'],
	['/.//elsewhere.example', '/now'],
	['/c/../..//elsewhere.example', '/now'],
	['/.\\/elsewhere.example', '/now'],
	[null, '/now']
])('after signing in, %s leads to %s', (next, path) =>
	expect(localPathOf('https://meniscus.example.edu', next)).toBe(path)
);

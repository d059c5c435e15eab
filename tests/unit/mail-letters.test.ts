import { beforeAll, expect, test } from 'vitest';
import { letters } from '../../src/lib/server/mail/letters';

beforeAll(() => {
	Object.assign(process.env, {
		ORIGIN: 'https://meniscus.example.edu',
		DATABASE_URL: 'postgres://a:b@127.0.0.1/c',
		S3_ENDPOINT: 'http://127.0.0.1:1',
		S3_BUCKET: 'x',
		S3_ACCESS_KEY_ID: 'x',
		S3_SECRET_ACCESS_KEY: 'x',
		SMTP_URL: 'smtp://127.0.0.1:1',
		MAIL_FROM: 'a@b.example'
	});
});

const course = 'PC 310 Physical Chemistry Laboratory';

test('an invitation says who, where and as what, and holds its link alone on a line', () => {
	const { subject, text } = letters.invitation({
		token: 'abc',
		course,
		institution: 'Harrow Point College',
		role: 'grader',
		from: 'Ruth Osei',
		name: 'Amal Haddad',
		until: '15 December'
	});
	expect(subject).toBe(`Your place in ${course}`);
	expect(text).toContain(
		`Amal Haddad,\n\nRuth Osei added you to ${course} at Harrow Point College as a grader.`
	);
	expect(text.split('\n')).toContain('https://meniscus.example.edu/invitation/abc');
	expect(text).toContain('until 15 December');
	expect(
		letters.invitation({ token: 'abc', course, institution: 'x', role: 'student', from: 'y', until: 'z' })
			.text
	).toMatch(/^Hello,/);
});

test('each letter of an account links to its page', () => {
	const labSection = 'Tuesday';
	expect(letters.verification({ token: 'abc', name: 'Bo', course, labSection }).text.split('\n')).toContain(
		'https://meniscus.example.edu/verify/abc'
	);
	expect(letters.reset({ token: 'abc', name: 'Bo' }).text.split('\n')).toContain(
		'https://meniscus.example.edu/reset/abc'
	);
	expect(
		letters['already-known']({ course, labSection, words: 'oak-tide-moss-kite' }).text.split('\n')
	).toContain('https://meniscus.example.edu/join/oak-tide-moss-kite');
	const welcome = letters.welcome({ name: 'Bo', course, slug: 'pc310', labSection, meets: 'Tuesday 13:00' });
	expect(welcome.text).toContain(`you are in ${course}, Tuesday (Tuesday 13:00).`);
	expect(welcome.text.split('\n')).toContain('https://meniscus.example.edu/c/pc310');
});

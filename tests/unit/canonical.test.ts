import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonicalPart, hex, sha256 } from '../../src/lib/server/reports/canonical';

const text = (value: unknown): string => Buffer.from(canonicalPart(value)).toString('utf8');

describe('canonical JSON', () => {
	it('is that of RFC 8785, section 3.2.2 (its example, copied by value)', () => {
		const value = {
			numbers: [Number('333333333.33333329'), 1e30, 4.5, 2e-3, 0.000000000000000000000000001],
			string: '\u20ac$\u000F\u000aA\'\u0042\u0022\u005c\\"/',
			literals: [null, true, false]
		};
		expect(text(value)).toBe(
			'{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}'
		);
	});

	it('orders keys by UTF-16 units, as section 3.2.3 has it', () => {
		const keys = ['\u20ac', '\r', '\ufb33', '1', '\ud83d\ude00', '\u0080', '\u00f6'];
		const written = text(Object.fromEntries(keys.map((key) => [key, 0])));
		const positions = ['\\r', '1', '\u0080', '\u00f6', '\u20ac', '\ud83d\ude00', '\ufb33'].map((key) =>
			written.indexOf(`"${key}"`)
		);
		expect(positions).toEqual([...positions].sort((a, b) => a - b));
		expect(positions[0]).toBe(1);
	});

	it('does not depend on the order in which keys were set', () => {
		fc.assert(
			fc.property(fc.dictionary(fc.string(), fc.jsonValue()), (object) => {
				const turned = Object.fromEntries(Object.entries(object).reverse());
				expect(text(turned)).toBe(text(object));
			})
		);
	});

	it('reads back as the same value, whatever JSON can say', () => {
		fc.assert(
			fc.property(fc.jsonValue({ stringUnit: 'binary' }), (value) => {
				const plain = JSON.parse(JSON.stringify(value)) as unknown;
				const again = JSON.parse(text(value)) as unknown;
				// Half of a surrogate pair has no UTF-8; it is the one thing that is not kept.
				const wellFormed = JSON.parse(
					JSON.stringify(plain).replaceAll(/\\ud[89a-f][0-9a-f]{2}/gi, '\ufffd')
				) as unknown;
				expect(again).toEqual(wellFormed);
				expect(text(again)).toBe(text(value));
			})
		);
	});

	it('has a form for what a student can write and an evaluation can hold', () => {
		expect(text('half \ud83d of a pair')).toBe('"half \ufffd of a pair"');
		expect(text({ value: NaN, other: Infinity, left: undefined, zero: -0 })).toBe(
			'{"other":null,"value":null,"zero":0}'
		);
		expect(text([undefined, 1])).toBe('[null,1]');
	});

	it('is hashed as UTF-8', () => {
		// FIPS 180-2, appendix B.1: SHA-256 of "abc".
		expect(hex(sha256(Buffer.from('abc')))).toBe(
			'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'
		);
	});
});

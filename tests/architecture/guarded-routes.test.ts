import { describe, expect, it } from 'vitest';
import { routeFiles } from './route-files';

/** Open to somebody who is not signed in; everything else belongs into a guarded group. */
const OPEN = [
	'/',
	'/(auth)/forgotten',
	'/(auth)/invitation/[token]',
	'/(auth)/reset/[token]',
	'/(auth)/sign-in',
	'/(auth)/sign-in/confirm',
	'/(auth)/sign-in/link',
	'/(auth)/sign-out',
	'/healthz',
	'/mailbox',
	'/mailbox/[mail]',
	'/theme'
];
const GUARDED = /^\/\((app|portal|api|account)\)(\/|$)/;
const files = routeFiles();

describe('routes', () => {
	it('are found at all', () => {
		expect(files.map(({ routeId }) => routeId)).toEqual(
			expect.arrayContaining(['/(app)/desk', '/(portal)/portal/reports', '/(auth)/sign-in'])
		);
	});

	it.each(files.filter(({ routeId }) => GUARDED.test(routeId)))(
		'$file: every load, action and method is made with guard(…)',
		({ entrances }) => {
			expect(entrances.length).toBeGreaterThan(0);
			expect(entrances.filter(({ guarded }) => !guarded)).toEqual([]);
		}
	);

	it('outside the guarded groups are the known open ones, and no others', () => {
		const open = files.filter(({ routeId }) => !GUARDED.test(routeId)).map(({ routeId }) => routeId);
		expect([...new Set(open)].sort()).toEqual(OPEN);
	});
});

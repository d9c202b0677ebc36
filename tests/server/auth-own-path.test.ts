import { describe, expect, it } from 'vitest';
import { ownPath } from '$lib/server/auth/own-path';

describe('where to go after signing in', () => {
	it.each(['/surveys', '/surveys?page=2&q=a%20b', '/'])('accepts %s', (path) => {
		expect(ownPath(path, '/desk')).toBe(path);
	});

	it.each([
		'https://evil.example/',
		'//evil.example/',
		'/\\evil.example',
		'/\t/evil.example',
		'javascript:alert(1)',
		'surveys',
		'',
		null
	])('does not follow %j', (path) => {
		const target = ownPath(path, '/desk');
		expect(new URL(target, 'https://pq.example').origin).toBe('https://pq.example');
		expect(target.startsWith('//')).toBe(false);
		expect(target).not.toContain('evil');
	});
});

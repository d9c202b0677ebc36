import js from '@eslint/js';
import boundaries from 'eslint-plugin-boundaries';
import prettier from 'eslint-config-prettier';
import svelte from 'eslint-plugin-svelte';
import globals from 'globals';
import ts from 'typescript-eslint';
import svelteConfig from './svelte.config.js';

/** Rooms of the house, and which rooms each may enter. What is not listed is forbidden. */
const ROOMS = [
	['numerics', 'src/lib/numerics/**'],
	['units', 'src/lib/units/**'],
	['result', 'src/lib/result.ts'],
	['access', 'src/lib/access/**'],
	['recording', 'src/lib/recording/**'],
	['harmonics', 'src/lib/harmonics/**'],
	['synthesis', 'src/lib/synthesis/**'],
	['accuracy', 'src/lib/accuracy/**'],
	['limits', 'src/lib/limits/**'],
	['uncertainty', 'src/lib/uncertainty/**'],
	['assessment', 'src/lib/assessment/**'],
	['register', 'src/lib/register/**'],
	['checks', 'src/lib/checks/**'],
	['report', 'src/lib/report/**'],
	['analysis-document', 'src/lib/analysis-document/**'],
	['charts', 'src/lib/charts/**'],
	['state', 'src/lib/state/**'],
	['api-client', 'src/lib/api-client/**'],
	['ui', 'src/lib/components/ui/**'],
	['components', 'src/lib/components/**'],
	['server', 'src/lib/server/**'],
	['routes', 'src/routes/**'],
	['hooks', 'src/hooks.server.ts']
];
const DOMAIN = [
	'recording',
	'harmonics',
	'limits',
	'uncertainty',
	'assessment',
	'register',
	'checks',
	'report',
	'units',
	'result',
	'access',
	'numerics'
];
const MAY_ENTER = {
	numerics: ['numerics'],
	units: ['units', 'result'],
	result: [],
	access: [],
	recording: ['recording', 'numerics', 'units', 'result'],
	harmonics: ['harmonics', 'recording', 'numerics', 'units', 'result'],
	synthesis: ['synthesis', 'recording', 'harmonics', 'numerics', 'units', 'result'],
	accuracy: ['accuracy', 'synthesis', 'harmonics', 'recording', 'numerics', 'result'],
	limits: ['limits', 'units', 'result'],
	uncertainty: ['uncertainty', 'numerics'],
	assessment: [
		'assessment',
		'uncertainty',
		'limits',
		'harmonics',
		'recording',
		'numerics',
		'units',
		'result'
	],
	register: ['register', 'assessment', 'limits', 'recording', 'units', 'result'],
	checks: [
		'checks',
		'report',
		'register',
		'assessment',
		'limits',
		'harmonics',
		'recording',
		'units',
		'result'
	],
	report: [
		'report',
		'checks',
		'register',
		'assessment',
		'limits',
		'harmonics',
		'recording',
		'access',
		'units',
		'result'
	],
	'analysis-document': [
		'analysis-document',
		'register',
		'assessment',
		'uncertainty',
		'limits',
		'harmonics',
		'recording',
		'result'
	],
	charts: ['charts', 'units', 'recording', 'harmonics', 'limits', 'assessment', 'checks', 'report'],
	state: ['state', ...DOMAIN],
	'api-client': ['api-client', ...DOMAIN],
	ui: ['ui', 'units'],
	components: ['components', 'ui', 'state', 'api-client', 'charts', ...DOMAIN],
	server: ['server', 'charts', ...DOMAIN],
	routes: ['routes', 'server', 'components', 'ui', 'state', 'api-client', 'charts', ...DOMAIN],
	hooks: ['server', 'access']
};

export default ts.config(
	{
		ignores: [
			'build/',
			'.svelte-kit/',
			'node_modules/',
			'data/',
			'test-results/',
			'coverage/',
			// AssemblyScript, which is no TypeScript.
			'src/lib/numerics/kernels/assembly/'
		]
	},
	js.configs.recommended,
	...ts.configs.recommended,
	...svelte.configs.recommended,
	prettier,
	...svelte.configs.prettier,
	{ languageOptions: { globals: { ...globals.node, ...globals.browser } } },
	{
		files: ['**/*.svelte', '**/*.svelte.ts'],
		languageOptions: { parserOptions: { parser: ts.parser, extraFileExtensions: ['.svelte'], svelteConfig } }
	},
	{
		rules: {
			// TypeScript itself finds undefined names.
			'no-undef': 'off',
			// The app is served from the root of its own host; base paths are not used.
			'svelte/no-navigation-without-resolve': 'off',
			'@typescript-eslint/no-explicit-any': 'error',
			'@typescript-eslint/consistent-type-imports': 'error',
			'@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', ignoreRestSiblings: true }]
		}
	},
	{
		files: ['src/**/*.{ts,svelte}'],
		plugins: { boundaries },
		settings: {
			'import/resolver': { typescript: { alwaysTryTypes: true, project: './tsconfig.json' } },
			'boundaries/elements': ROOMS.map(([type, pattern]) => ({ type, pattern, partialMatch: false }))
		},
		rules: {
			'boundaries/dependencies': [
				'error',
				{
					default: 'disallow',
					policies: Object.entries(MAY_ENTER).map(([from, to]) => ({
						from: { element: { type: from } },
						allow: to.map((type) => ({ to: { element: { type } } }))
					}))
				}
			]
		}
	},
	{
		// Domain rooms know neither the framework nor the machine they run on.
		files: [
			'src/lib/{numerics,units,recording,harmonics,synthesis,accuracy,limits,uncertainty,assessment,register,checks,report,analysis-document,access,charts}/**/*.ts'
		],
		rules: {
			'no-restricted-imports': [
				'error',
				{
					patterns: [
						{
							group: ['node:*', '@sveltejs/*', '$app/*', '$env/*', 'knex', 'better-sqlite3'],
							message: 'Domain rooms stay pure.'
						}
					]
				}
			]
		}
	},
	{
		// Routes translate; they do not query.
		files: ['src/routes/**/*.{ts,svelte}'],
		rules: {
			'no-restricted-imports': [
				'error',
				{
					patterns: [
						{ group: ['$lib/server/db/*', '$lib/server/repositories/*', 'knex'], message: 'Call a service.' }
					]
				}
			]
		}
	}
);

/**
 * The design tokens by name. Their values, light and dark, are the CSS variables of src/app.css, so that a theme
 * is switched by the browser alone; nothing outside this list can be used as a colour or a type size.
 * @type {import('tailwindcss').Config}
 */
export default {
	content: ['./src/**/*.{html,svelte,ts}'],
	theme: {
		colors: {
			transparent: 'transparent',
			current: 'currentColor',
			inherit: 'inherit',
			paper: 'var(--paper)',
			sheet: 'var(--sheet)',
			rule: 'var(--rule)',
			edge: 'var(--edge)',
			ink: { DEFAULT: 'var(--ink)', soft: 'var(--ink-soft)', faint: 'var(--ink-faint)' },
			copper: {
				DEFAULT: 'var(--copper)',
				deep: 'var(--copper-deep)',
				tint: 'var(--copper-tint)',
				on: 'var(--on-copper)'
			},
			verdigris: { DEFAULT: 'var(--verdigris)', tint: 'var(--verdigris-tint)' },
			ochre: { DEFAULT: 'var(--ochre)', tint: 'var(--ochre-tint)' },
			oxide: {
				DEFAULT: 'var(--oxide)',
				tint: 'var(--oxide-tint)',
				wash: 'var(--oxide-wash)',
				on: 'var(--on-oxide)'
			},
			slate: { DEFAULT: 'var(--slate)', tint: 'var(--slate-tint)' },
			phase: {
				1: 'var(--phase-1)',
				2: 'var(--phase-2)',
				3: 'var(--phase-3)',
				n: 'var(--phase-n)'
			}
		},
		fontFamily: {
			sans: ['IBM Plex Sans', 'ui-sans-serif', 'system-ui', 'sans-serif'],
			mono: ['IBM Plex Mono', 'ui-monospace', 'monospace']
		},
		// 12, 13, 15, 18, 24 and 32 px; `base` is 16 px in the portal.
		fontSize: {
			xs: ['0.75rem', { lineHeight: '1.35' }],
			sm: ['0.8125rem', { lineHeight: '1.45' }],
			base: ['var(--text-base-size)', { lineHeight: '1.5' }],
			lg: ['1.125rem', { lineHeight: '1.4' }],
			xl: ['1.5rem', { lineHeight: '1.3' }],
			'2xl': ['2rem', { lineHeight: '1.2' }]
		},
		fontWeight: { normal: '400', medium: '500', semibold: '600' },
		borderRadius: { none: '0', DEFAULT: '1px', full: '9999px' },
		boxShadow: { none: 'none', lifted: '0 1px 0 var(--rule), 0 18px 48px -12px rgb(0 0 0 / 0.35)' },
		extend: {
			maxWidth: { page: '100rem', text: '40rem', portal: '72.75rem' }
		}
	}
};

import type { Config } from 'tailwindcss';

/** The tokens of the sheet. Values live as custom properties in src/app.css, so that light and dark are one theme. */
const token = (name: string) => `var(--${name})`;

export default {
	content: ['./src/**/*.{html,js,svelte,ts}'],
	theme: {
		colors: {
			transparent: 'transparent',
			current: 'currentColor',
			page: token('page'),
			margin: token('margin'),
			chosen: token('chosen'),
			attend: token('attend'),
			ink: token('ink'),
			quiet: token('quiet'),
			liquid: token('liquid'),
			attention: token('attention'),
			stop: token('stop'),
			control: token('control'),
			hairline: token('hairline')
		},
		fontFamily: {
			// What people wrote.
			serif: ["'Literata Variable'", 'Literata', 'Georgia', 'serif'],
			// What the software says; symbols and units fall through to Literata, which has Greek and the micro sign.
			sans: ["'Atkinson Hyperlegible Next Variable'", "'Literata Variable'", 'system-ui', 'sans-serif'],
			// Readings.
			mono: ["'Atkinson Hyperlegible Mono Variable'", "'Literata Variable'", 'ui-monospace', 'monospace']
		},
		fontSize: {
			small: ['0.8125rem', '1.125rem'],
			note: ['0.875rem', '1.25rem'],
			remark: ['0.9375rem', '1.3125rem'],
			reading: ['0.9375rem', '1.75rem'],
			base: ['1rem', '1.5rem'],
			text: ['1.125rem', '1.75rem'],
			'text-narrow': ['1.0625rem', '1.75rem'],
			h3: ['1.125rem', '1.75rem'],
			h2: ['1.375rem', '1.75rem'],
			h1: ['1.75rem', '2.1875rem']
		},
		borderRadius: { none: '0', DEFAULT: '2px', full: '9999px' },
		screens: { tablet: '720px', desk: '1024px', wide: '1440px' },
		boxShadow: { none: 'none', halo: '0 0 0 8px var(--page)' },
		extend: {}
	}
} satisfies Config;

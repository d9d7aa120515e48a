import type { Config } from 'tailwindcss';

/** The product's tokens. Colours are CSS variables so that light and dark share one set of class names. */
export default {
	content: ['./src/**/*.{html,svelte,ts}'],
	theme: {
		colors: {
			transparent: 'transparent',
			current: 'currentColor',
			page: 'var(--page)',
			panel: 'var(--panel)',
			ink: 'var(--ink)',
			quiet: 'var(--quiet)',
			edge: 'var(--edge)',
			hairline: 'var(--hairline)',
			act: 'var(--act)',
			'on-act': 'var(--on-act)',
			caution: 'var(--caution)',
			stop: 'var(--stop)',
			good: 'var(--good)',
			night: 'var(--night)',
			daylight: 'var(--daylight)'
		},
		fontSize: {
			13: ['0.8125rem', { lineHeight: '1.4' }],
			15: ['0.9375rem', { lineHeight: '1.5' }],
			17: ['1.0625rem', { lineHeight: '1.45' }],
			21: ['1.3125rem', { lineHeight: '1.25' }],
			28: ['1.75rem', { lineHeight: '1.15' }],
			40: ['2.5rem', { lineHeight: '1.05' }]
		},
		fontWeight: { normal: '400', semibold: '600', heavy: '800' },
		borderRadius: { none: '0', DEFAULT: '6px', arch: '28px 6px 6px 6px' },
		extend: {
			fontFamily: { sans: ['"Nunito Variable"', 'Nunito', 'sans-serif'] },
			maxWidth: { text: '68ch' }
		}
	}
} satisfies Config;

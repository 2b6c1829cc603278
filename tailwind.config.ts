import type { Config } from 'tailwindcss'

/** Every colour is a token of app/assets/css/main.css, so that both themes have the same names. */
const token = (name: string) => `rgb(var(--${name}) / <alpha-value>)`

export default {
  content: ['./app/**/*.{vue,ts}'],
  darkMode: ['selector', '[data-theme="dark"]'],
  theme: {
    fontFamily: { sans: ['"IBM Plex Sans"', 'system-ui', 'sans-serif'] },
    fontSize: { s: ['13px', '1.45'], m: ['15px', '1.45'], l: ['18px', '1.4'], xl: ['24px', '1.3'] },
    borderRadius: { none: '0', DEFAULT: '2px', full: '9999px' },
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      paper: token('paper'),
      sheet: token('sheet'),
      ink: token('ink'),
      faint: token('faint'),
      rule: token('rule'),
      fibre: token('fibre'),
      sheath: token('sheath'),
      beyond: token('beyond'),
      doubt: token('doubt'),
      cold: token('cold'),
      band: token('band'),
      bandink: token('bandink'),
    },
  },
} satisfies Config

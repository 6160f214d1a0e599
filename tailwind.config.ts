import type { Config } from 'tailwindcss'

const token = (name: string) => `var(--${name})`

export default {
  content: ['./app/**/*.{vue,ts}'],
  theme: {
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      ...Object.fromEntries(['ground', 'lift', 'sunk', 'line', 'edge', 'ink', 'soft', 'accent', 'accent-ink', 'accent-wash', 'holds', 'tight', 'breaks', 'holds-wash', 'tight-wash', 'breaks-wash', 'button', 'button-ink', 'field', 'field-edge'].map(name => [name, token(name)])),
    },
    fontSize: { small: token('text-small'), body: token('text-body'), large: token('text-large') },
    fontFamily: { sans: ['Inter', 'system-ui', 'sans-serif'] },
    // What can be hit is 24 pixels high at least (WCAG 2.2, 2.5.8), whatever the size of type.
    extend: { minHeight: { target: '24px' }, minWidth: { target: '24px' }, maxWidth: { page: '84rem', form: '40rem' } },
  },
  corePlugins: { preflight: true },
} satisfies Config

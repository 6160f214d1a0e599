import withNuxt from './.nuxt/eslint.config.mjs'

export default withNuxt(
  { ignores: ['.output/**', '.data/**', '.nuxt/**', 'drizzle/**'] },
  {
    // Formulas read better with few parentheses, and short things better on one line.
    rules: {
      '@stylistic/no-mixed-operators': 'off',
      '@stylistic/operator-linebreak': 'off',
      '@stylistic/max-statements-per-line': 'off',
      '@stylistic/quote-props': 'off',
      'vue/max-attributes-per-line': 'off',
      'vue/singleline-html-element-content-newline': 'off',
      'vue/multiline-html-element-content-newline': 'off',
      'nuxt/nuxt-config-keys-order': 'off',
    },
  },
)

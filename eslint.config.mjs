// @ts-check
import withNuxt from './.nuxt/eslint.config.mjs'

export default withNuxt({
  ignores: ['.output/**', '.data/**', 'data/**', 'coverage/**', 'reports/**', '.stryker-tmp/**', 'tests/e2e/out/**'],
}, {
  rules: {
    '@typescript-eslint/no-explicit-any': 'error',
  },
}, {
  files: ['app/pages/**/*.vue', 'app/layouts/*.vue', 'app/app.vue', 'app/error.vue'],
  rules: { 'vue/multi-word-component-names': 'off' },
})

declare module 'virtual:formula-cards' {
  import type { FormulaCard } from '#shared/formula-cards/read-cards'

  export const cards: readonly FormulaCard[]
}

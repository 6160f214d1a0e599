declare module 'virtual:formula-cards' {
  import type { FormulaCard } from '#shared/formats/formula-cards'

  export const cards: readonly FormulaCard[]
}

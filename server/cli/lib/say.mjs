/** An outcome a person can mend: printed as it is, without a stack. */
export class Refusal extends Error {
  /** @param {string} message what is wrong and how to mend it */
  constructor(message) {
    super(message)
    this.name = 'Refusal'
  }
}

const began = Date.now()

/**
 * One line of progress, with the seconds since the command began.
 *
 * @param {string} text
 */
export function step(text) {
  console.log(`${((Date.now() - began) / 1000).toFixed(0).padStart(4)} s  ${text}`)
}

/**
 * Prints why a command ends, a refusal plainly and anything unforeseen with its stack.
 *
 * @param {unknown} error
 */
export function explain(error) {
  if (error instanceof Refusal) console.error(`\n${error.message}\n`)
  else console.error(error)
}

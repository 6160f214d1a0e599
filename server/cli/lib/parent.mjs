/**
 * Calls back if npm, having started this process, is gone without a word (kill −9): nobody would be left who
 * could stop it. A process that npm did not start may outlive its parent.
 *
 * @param {() => void} onLost
 */
export function whenNpmIsGone(onLost) {
  const parent = npmParent()
  if (!parent) return
  const timer = setInterval(() => {
    if (process.ppid === parent) return
    clearInterval(timer)
    onLost()
  }, 500)
  timer.unref()
}

/** @returns {number | undefined} the process id of the npm that started this process */
export function npmParent() {
  return process.env.npm_lifecycle_event ? process.ppid : undefined
}

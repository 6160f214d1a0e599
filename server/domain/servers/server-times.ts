/** How often a process says that it lives. */
export const beatMs = 10_000
/** Unseen for longer without having stopped, a process counts as silent. */
export const silentAfterMs = 60_000
/** So long after the database was away the others have had time to be seen again. */
export const steadyAfterMs = 30_000
/** Silent for longer, it is forgotten. */
export const forgottenAfterMs = 24 * 3600_000

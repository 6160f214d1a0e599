/** The trail's words that others look for. A scheduled use that could not be: */
export const useDeclined = 'element-set.use-declined'
/** A set that the rule of its spacecraft leaves to people: */
export const ruleDeclines = 'element-set.rule-declines'

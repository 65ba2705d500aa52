import type { Check } from './check.ts'

const WORDS = { error: 'error', warning: 'warning', info: 'information' }

/** The page of a rule, made from the rule. */
export const page = ({ id, severity, summary, why, wrong, right }: Check): string =>
  `# ${id}

**${WORDS[severity]}** · ${summary}

${why}

Wrong:

\`\`\`yaml
${wrong.trimEnd()}
\`\`\`

Right:

\`\`\`yaml
${right.trimEnd()}
\`\`\`

To silence it on one line, write \`# braggline: allow ${id}\` at the line's end or alone on the line above; to change its
severity in a file, write \`checks: {${id}: off}\` (or \`info\`, \`warning\`, \`error\`).
`

/** The list of all rules, with links to their pages. */
export const contents = (checks: readonly Check[]): string =>
  `# The rules

Each page is made from its rule: \`npm run generate\`.

| rule | severity | finds |
| --- | --- | --- |
${checks.map(({ id, severity, summary }) => `| [${id}](${id}.md) | ${WORDS[severity]} | ${summary} |`).join('\n')}
`

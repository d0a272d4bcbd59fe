/** What a key of a file is, in words, for help and documentation. */
export interface TableRow {
  readonly key: string;
  /** What the file may hold, in words. */
  readonly values: string;
  /** The default in words; "-" where one is required. */
  readonly standard: string;
  /** One line of help. */
  readonly help: string;
  /** The command line's form, where it has one. */
  readonly flag?: string;
  /** False: the key is refused by name in this version. */
  readonly available?: boolean;
}

/** A table of keys as Markdown, for the documentation. */
export function tableMarkdown(table: readonly TableRow[]): string {
  const escape = (cell: string): string => cell.replaceAll('|', '\\|').replaceAll('<', '&lt;');
  const code = (words: string): string => `\`${words.replaceAll('|', '\\|')}\``;
  const inCode = (cell: string): string =>
    cell
      .split('`')
      .map((part, i) => (i % 2 ? code(part) : escape(part)))
      .join('');
  const rows = table.map(({ key, values, standard, help, flag, available = true }) => {
    const what = available ? inCode(values) : `${inCode(values)}; not available yet`;
    return `| ${code(key)} | ${help} | ${what} | ${inCode(standard)} | ${flag === undefined ? '' : code(flag)} |`;
  });
  return ['| key | what it is | values | default | command line |', '|---|---|---|---|---|', ...rows, ''].join('\n');
}

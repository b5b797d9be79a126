const SPACE = '&nbsp;'; // the character itself would be trimmed away
const ROW = /^\|(.*)\|$/gm;
const RULE = /^[|:\- ]+$/;
const CELL_END = /(?<!\\)\|/;

/** Markdown with a fixed space on either side of each cell: VS Code sets the columns of a hover's tables without any. */
export function spacedTables(markdown: string): string {
  return markdown.replace(ROW, (row: string, inside: string) => {
    if (RULE.test(row)) return row;
    const cells = inside.split(CELL_END).map((cell) => SPACE + cell.trim() + SPACE);
    return `|${cells.join('|')}|`;
  });
}

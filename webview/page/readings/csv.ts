/** Rows as comma-separated values; cells with a comma, a quote or a new line in them are quoted. */
export function csvText(rows: readonly (readonly (string | number)[])[]): string {
  return rows.map((row) => row.map((cell) => quoted(String(cell))).join(',')).join('\n');
}

function quoted(text: string): string {
  return /[",\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}

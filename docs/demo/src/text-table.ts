/** A table of texts, columns aligned: the first to the left, the others to the right. */
export function textTable(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const widths = head.map((title, column) =>
    Math.max(title.length, ...rows.map((row) => (row[column] ?? '').length)),
  );
  const line = (cells: readonly string[]): string =>
    cells
      .map((cell, column) => (column === 0 ? cell.padEnd(widths[column]!) : cell.padStart(widths[column]!)))
      .join('  ')
      .trimEnd();
  return [line(head), widths.map((width) => '─'.repeat(width)).join('  '), ...rows.map(line)].join('\n');
}

/** A temperature in degrees Celsius with a fixed number of decimals; a dash where there is none. */
export function degrees(kelvin: number, decimals = 2): string {
  return Number.isFinite(kelvin) ? (kelvin - 273.15).toFixed(decimals) : '—';
}

import type { ReactNode } from 'react';

/** One column of a table. */
export interface DataColumn {
  key: string;
  label: string;
  /** Figures stand in the mono face and end at the right, so that digits stand under digits. */
  isFigure?: boolean | undefined;
  align?: 'left' | 'right' | undefined;
  /** Softer, for what is rarely read. */
  isSoft?: boolean | undefined;
  /** Takes what width is left. */
  isWide?: boolean | undefined;
}

export interface DataTableProps {
  /** Says what the table holds; seen by a screen reader only unless `isCaptionShown`. */
  caption: string;
  isCaptionShown?: boolean | undefined;
  columns: DataColumn[];
  rows: {
    key: string;
    cells: Record<string, ReactNode>;
    isCurrent?: boolean | undefined;
    isSoft?: boolean | undefined;
  }[];
  /** Stands in the table when there is no row. */
  emptyWords: string;
}

/** A dense ruled table with aligned figures. */
export function DataTable({ caption, isCaptionShown = false, columns, rows, emptyWords }: DataTableProps) {
  return (
    <div className="data-table-box">
      <table className="data-table">
        <caption className={isCaptionShown ? undefined : 'unseen'}>{caption}</caption>
        <thead>
          <tr>
            {columns.map((column) => (
              <th key={column.key} scope="col" {...columnMarks(column)}>
                {column.label}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr
              key={row.key}
              aria-current={row.isCurrent === true || undefined}
              data-soft={row.isSoft === true || undefined}
            >
              {columns.map((column) => (
                <td key={column.key} {...columnMarks(column)}>
                  {row.cells[column.key]}
                </td>
              ))}
            </tr>
          ))}
          {rows.length === 0 && (
            <tr>
              <td className="data-table-empty" colSpan={columns.length}>
                {emptyWords}
              </td>
            </tr>
          )}
        </tbody>
      </table>
    </div>
  );
}

function columnMarks({ isFigure = false, align, isSoft = false, isWide = false }: DataColumn) {
  return {
    'data-figure': isFigure || undefined,
    'data-align': align ?? (isFigure ? 'right' : undefined),
    'data-soft': isSoft || undefined,
    'data-wide': isWide || undefined,
  };
}

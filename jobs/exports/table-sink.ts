import type { TableDefinition } from '@/lib/exports/column';
import type { TablePiece } from './table-pieces';

/** Takes the pieces of one table and makes files of them. */
export interface TableSink {
  write(piece: TablePiece): Promise<void>;
  /** @returns names of the files made, relative to the folder */
  finish(): Promise<string[]>;
  /** Closes what is open and leaves what was made for the next try to replace. */
  abandon(): Promise<void>;
}

export interface SinkPlace {
  /** Where the files go. */
  folder: string;
  table: TableDefinition;
}

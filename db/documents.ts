import { randomUUID } from 'node:crypto';
import type { Store } from './open.ts';

export type DocumentTable =
  | 'studies'
  | 'trajectories'
  | 'cases'
  | 'stacks'
  | 'options'
  | 'parts'
  | 'assessments'
  | 'reports'
  | 'beltTables';

export interface StoredDocument<T> {
  readonly id: string;
  readonly studyId: string | null;
  readonly name: string;
  readonly body: T;
  readonly createdUtc: string;
  readonly version: number;
}

interface Row {
  readonly id: string;
  readonly studyId?: string;
  readonly name: string;
  readonly body: string;
  readonly createdUtc: string;
  readonly version: number;
}

/** One kind of document: prepared statements made once, listed in order of creation with a cursor. */
export class Documents<T> {
  private readonly store: Store;
  private readonly table: DocumentTable;
  private readonly ofStudy: boolean;

  constructor(store: Store, table: DocumentTable) {
    this.store = store;
    this.table = table;
    this.ofStudy = table !== 'studies';
  }

  /** @param extra - further columns of the table, for example the blob of a trajectory */
  insert(
    studyId: string | null,
    name: string,
    body: T,
    extra: Readonly<Record<string, string>> = {},
    id = newId(),
  ): StoredDocument<T> {
    const createdUtc = new Date().toISOString();
    const columns = ['id', 'name', 'body', 'createdUtc', ...(this.ofStudy ? ['studyId'] : []), ...Object.keys(extra)];
    const values = { id, name, body: JSON.stringify(body), createdUtc, studyId, ...extra };
    this.store
      .prepare(`INSERT INTO ${this.table} (${columns.join(', ')}) VALUES (${columns.map((c) => `@${c}`).join(', ')})`)
      .run(values);
    return { id, studyId, name, body, createdUtc, version: 1 };
  }

  get(id: string): StoredDocument<T> | undefined {
    const row = this.store.prepare(`SELECT * FROM ${this.table} WHERE id = ?`).get(id) as Row | undefined;
    return row && this.document(row);
  }

  column(id: string, column: string): string | undefined {
    const row = this.store.prepare(`SELECT ${column} AS value FROM ${this.table} WHERE id = ?`).get(id) as
      | { value: string }
      | undefined;
    return row?.value;
  }

  list(
    studyId: string | null,
    limit: number,
    cursor: string | null,
  ): { items: StoredDocument<T>[]; nextCursor: string | null } {
    const after = cursor === null ? 0 : Number(cursor);
    const filter = studyId !== null && this.ofStudy ? 'AND studyId = @studyId' : '';
    const rows = this.store
      .prepare(`SELECT rowid AS row, * FROM ${this.table} WHERE rowid > @after ${filter} ORDER BY rowid LIMIT @limit`)
      .all({ after, studyId, limit: limit + 1 }) as (Row & { row: number })[];
    const items = rows.slice(0, limit);
    return {
      items: items.map((row) => this.document(row)),
      nextCursor: rows.length > limit ? String(items[items.length - 1].row) : null,
    };
  }

  /** @returns the new document, or undefined when the version is not the stored one */
  update(id: string, name: string, body: T, version: number): StoredDocument<T> | undefined {
    const { changes } = this.store
      .prepare(`UPDATE ${this.table} SET name = ?, body = ?, version = version + 1 WHERE id = ? AND version = ?`)
      .run(name, JSON.stringify(body), id, version);
    return changes === 0 ? undefined : this.get(id);
  }

  delete(id: string): boolean {
    return this.store.prepare(`DELETE FROM ${this.table} WHERE id = ?`).run(id).changes > 0;
  }

  private document(row: Row): StoredDocument<T> {
    return {
      id: row.id,
      studyId: row.studyId ?? null,
      name: row.name,
      body: JSON.parse(row.body) as T,
      createdUtc: row.createdUtc,
      version: row.version,
    };
  }
}

export function newId(): string {
  return randomUUID().replaceAll('-', '').slice(0, 16);
}

import type Sqlite from 'better-sqlite3'
import type { Insertable } from 'kysely'
import type { Tables } from '#server/database/tables/index'

const snake = (name: string) => name.replace(/[A-Z]/g, letter => `_${letter.toLowerCase()}`)

/** Inserts through prepared statements, one for each table: as quick as SQLite takes them. */
export class Writer {
  private readonly statements = new Map<string, Sqlite.Statement>()

  constructor(private readonly database: Sqlite.Database) {}

  /** The first row of a table decides its columns; every later one names the same, in the same order. */
  insert<T extends keyof Tables & string>(table: T, row: Insertable<Tables[T]>): void {
    let statement = this.statements.get(table)
    if (!statement) {
      const columns = Object.keys(row).map(snake)
      statement = this.database.prepare(`insert into ${snake(table)} (${columns.join(', ')}) values (${columns.map(() => '?').join(', ')})`)
      this.statements.set(table, statement)
    }
    statement.run(...Object.values(row))
  }
}

/** The series of `nextNumber`, read once at the start of a transaction and written back at its end. */
export class Counters {
  private readonly values = new Map<string, number>()

  constructor(private readonly database: Sqlite.Database) {}

  /** @example next('REF-2026') // => 'REF-2026-000123' */
  next(series: string): string {
    const known = this.values.get(series) ?? this.database.prepare('select value from counter where name = ?').pluck().get(series) as number | undefined ?? 0
    this.values.set(series, known + 1)
    return `${series}-${String(known + 1).padStart(6, '0')}`
  }

  /** Inside the transaction: others may count on before the next one. */
  keep(): void {
    const upsert = this.database.prepare('insert into counter (name, value) values (?, ?) on conflict (name) do update set value = excluded.value')
    for (const [name, value] of this.values) upsert.run(name, value)
    this.values.clear()
  }
}

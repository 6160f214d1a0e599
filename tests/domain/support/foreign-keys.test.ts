import { sql } from 'drizzle-orm'
import { expect, it } from 'vitest'
import { useTestDatabase } from '../../support/domain-test'

const test = useTestDatabase()

it('leads an index with every foreign key, so that removing a row never reads whole tables', async () => {
  const { rows } = await test.db.execute<{ place: string }>(sql`
    SELECT c.conrelid::regclass || '.' || a.attname AS place FROM pg_constraint c
    JOIN pg_attribute a ON a.attrelid = c.conrelid AND a.attnum = c.conkey[1]
    WHERE c.contype = 'f' AND c.connamespace = 'public'::regnamespace
    AND NOT EXISTS (SELECT 1 FROM pg_index i WHERE i.indrelid = c.conrelid AND i.indkey[0] = c.conkey[1])`)
  expect(rows.map(row => row.place)).toEqual([])
  expect((await test.db.execute(sql`SELECT 1 FROM pg_constraint WHERE contype = 'f'`)).rows.length).toBeGreaterThan(20)
})

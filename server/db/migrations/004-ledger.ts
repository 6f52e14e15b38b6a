/** The signed statement of each change of the key; and checkpoints by size, by which outsiders name them. */
export const ledgerUpkeep = [
  'ALTER TABLE ledger_keys ADD COLUMN IF NOT EXISTS statement TEXT NULL',
  'ALTER TABLE ledger_checkpoints ADD KEY IF NOT EXISTS checkpoints_size (size)',
]

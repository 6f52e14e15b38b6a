import { useState } from 'react'
import type { Token } from '../../../shared/contract/tokens.ts'
import { Button } from '../../ui/button.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { RevokeToken } from './revoke-token.tsx'

export function TokenTable({ tokens }: { tokens: readonly Token[] }) {
  const [revoking, setRevoking] = useState<Token | null>(null)
  return (
    <>
      <Table caption="Tokens, newest first">
        <thead>
          <tr>
            <Th>token</Th>
            <Th>id</Th>
            <Th>station</Th>
            <Th>scopes</Th>
            <Th>designs</Th>
            <Th>made by</Th>
            <Th unit="UTC">expires</Th>
            <Th unit="UTC">last used</Th>
            <Th>state</Th>
            <Th>
              <span className="sr-only">acts</span>
            </Th>
          </tr>
        </thead>
        <tbody>
          {tokens.map((token) => (
            <TokenRow key={token.id} token={token} onRevoke={() => setRevoking(token)} />
          ))}
        </tbody>
      </Table>
      {revoking ? <RevokeToken token={revoking} onClose={() => setRevoking(null)} /> : null}
    </>
  )
}

function TokenRow({ token, onRevoke }: { token: Token; onRevoke: () => void }) {
  const state = stateOf(token)
  return (
    <tr>
      <RowHead>{token.name}</RowHead>
      <Td className="font-mono text-small">{token.id}</Td>
      <Td>{token.station ?? <None />}</Td>
      <Td className="max-w-56">{token.scopes.join(', ')}</Td>
      <Td>{token.designs ? token.designs.join(', ') : 'all'}</Td>
      <Td>{token.createdBy}</Td>
      <Td className="text-ink-2">
        <TimeText at={token.expiresAt} />
      </Td>
      <Td className="text-ink-2">{token.lastUsedAt ? <TimeText at={token.lastUsedAt} /> : 'never'}</Td>
      <Td>{state}</Td>
      <Td align="right">
        {state === 'live' ? (
          <Button look="quiet" aria-label={`Revoke ${token.name}`} onClick={onRevoke}>
            revoke
          </Button>
        ) : null}
      </Td>
    </tr>
  )
}

function stateOf(token: Token): 'live' | 'expired' | 'revoked' {
  if (token.revokedAt) return 'revoked'
  return Date.parse(token.expiresAt) <= Date.now() ? 'expired' : 'live'
}

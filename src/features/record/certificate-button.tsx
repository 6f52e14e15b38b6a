import { useMutation } from '@tanstack/react-query'
import { pathOf } from '../../../shared/call.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { getCertificate } from '../../../shared/contract/trims.ts'
import { apiStream } from '../../lib/api.ts'
import { Button, type ButtonLook } from '../../ui/button.tsx'
import { downloadBlob } from '../../ui/download.ts'
import { announce } from '../../ui/status.tsx'

/** For paper: made by the server from the records as they stand in the ledger, with their proofs inside. */
export function CertificateButton({ record, look }: { record: TrimRecord; look: ButtonLook }) {
  const make = useMutation({
    mutationFn: async () => {
      const path = pathOf(getCertificate, { params: { id: record.id } })
      const response = await apiStream(path, new AbortController().signal)
      return response.blob()
    },
    onSuccess: (pdf) =>
      downloadBlob(
        `certificate ${record.unit} channel ${record.channel} record ${record.number}.pdf`.replaceAll(
          /[/\\]/g,
          '_',
        ),
        pdf,
      ),
    onError: (error) => announce(error.message),
  })
  return (
    <Button look={look} disabled={make.isPending} onClick={() => make.mutate()}>
      {make.isPending ? 'Making the certificate' : 'Certificate, PDF'}
    </Button>
  )
}

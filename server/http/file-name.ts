/**
 * A Content-Disposition that names a file to be kept, whatever the name holds (RFC 6266): a plain form for old readers, in which nothing
 * can end the quotes or the header, and the name itself in UTF-8, percent-encoded (RFC 8187).
 * @example fileName('Blatt 1.csv') // `attachment; filename="Blatt 1.csv"; filename*=UTF-8''Blatt%201.csv`
 */
export function fileName(name: string): string {
  const safe = name
    .replaceAll(/[\p{Cc}\p{Cf}\p{Zl}\p{Zp}/\\]/gu, '_')
    .replaceAll(/\p{Cs}/gu, '_')
    .replace(/^\.+/, '_')
  const plain = safe.replaceAll(/[^\x20-\x7e]|["%]/g, '_')
  const encoded = encodeURIComponent(safe).replaceAll(
    /['()*]/g,
    (mark) => `%${mark.charCodeAt(0).toString(16).toUpperCase()}`,
  )
  return `attachment; filename="${plain}"; filename*=UTF-8''${encoded}`
}

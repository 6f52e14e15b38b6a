/** Only a path of this app: an address of another site must not be reachable by way of signing in. */
export function wanted(to: string | null): string {
  return to?.startsWith('/') && !/^\/[/\\]/.test(to) && !to.startsWith('/sign-in') ? to : '/'
}

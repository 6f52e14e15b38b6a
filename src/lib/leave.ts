/** A full load of another address: nothing that was read or typed stays in the memory of the page. */
export const leave = {
  to(address: string): void {
    window.location.assign(address)
  },
}

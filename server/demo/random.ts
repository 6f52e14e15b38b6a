/** A seeded generator of our own for demo data: splitmix-like steps of 32 bits. Not for secrets, not for the solver. */
export class DemoRandom {
  #state: number

  constructor(seed: number) {
    this.#state = seed >>> 0
  }

  /** 0 to 1, 1 excluded. */
  next(): number {
    this.#state = (this.#state + 0x9e3779b9) >>> 0
    let bits = this.#state
    bits = Math.imul(bits ^ (bits >>> 16), 0x21f0aaad)
    bits = Math.imul(bits ^ (bits >>> 15), 0x735a2d97)
    return ((bits ^ (bits >>> 15)) >>> 0) / 2 ** 32
  }

  /** Within ± limit, evenly. */
  within(limit: number): number {
    return (2 * this.next() - 1) * limit
  }

  /** Nearly normal with standard deviation 1: twelve even draws. */
  normal(): number {
    let sum = -6
    for (let i = 0; i < 12; i++) sum += this.next()
    return sum
  }

  below(count: number): number {
    return Math.floor(this.next() * count)
  }
}

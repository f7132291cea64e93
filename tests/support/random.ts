/** Uniform numbers in [0, 1) from a seed: the same in every run (Lehmer generator modulo 2³¹ − 1). */
export function createRandom(seed: number): () => number {
  const modulus = 2147483647
  let state = (Math.abs(Math.round(seed * 7919)) % (modulus - 1)) + 1
  return () => {
    state = (state * 48271) % modulus
    return (state - 1) / (modulus - 1)
  }
}

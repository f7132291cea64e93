import type { AmplifierPart } from '#shared/network/types.ts'

/** An amplifier of the 10 MHz class with every figure present. */
const ordinary: AmplifierPart = {
  name: 'test amplifier',
  gbw: 1e7,
  a0: 1e6,
  phaseMargin: 60,
  minimumGain: 1,
  rin: 1e9,
  rcm: 1e12,
  cin: { common: 5e-12, differential: 3e-12 },
  rout: 100,
  vos: 2e-4,
  vosDrift: 2e-6,
  ib: 1e-11,
  ios: 5e-12,
  ibDoubling: 10,
  cmrr: 90,
  psrr: 95,
  en: 8e-9,
  enCorner: 50,
  in: 5e-15,
  inCorner: 0,
  slewRate: 5e6,
  inputLow: 0,
  inputHigh: 0,
  outputLow: 0.02,
  outputHigh: 0.02,
  outputResistanceLow: 0,
  outputResistanceHigh: 0,
  outputCurrent: 0.02,
  supplyCurrent: 1e-3,
  minimumSupply: 1.8,
  maximumSupply: 36,
  absolute: { low: 0.3, high: 0.3, current: 0.01 },
  phaseReversal: false,
  channels: 2,
}

export const buildAmplifierPart = (figures: Partial<AmplifierPart> = {}): AmplifierPart => ({
  ...ordinary,
  ...figures,
})

/** The textbook's amplifier: only what a case states differs from ideal. */
export const buildTextbookPart = (figures: Partial<AmplifierPart> = {}): AmplifierPart => ({
  ...ordinary,
  rin: 1e15,
  rcm: 1e18,
  cin: { common: 0, differential: 0 },
  rout: 0,
  ib: 0,
  ...figures,
})

import { NetworkBuilder } from '#shared/network/builder.ts'
import type { AmplifierPart, Network } from '#shared/network/types.ts'
import { buildAmplifierPart } from './amplifier-part.ts'

/** Short-hand for test networks: designators name the kind, values are SI. */
export class Bench {
  readonly builder = new NetworkBuilder()
  private readonly part: AmplifierPart

  constructor(part: AmplifierPart = buildAmplifierPart()) {
    this.part = part
  }

  r(ref: string, a: string, b: string, value: number): this {
    this.builder.resistor({ ref, a, b, value, stage: 'S1' })
    return this
  }

  c(ref: string, a: string, b: string, value: number): this {
    this.builder.capacitor({ ref, a, b, value, stage: 'S1' })
    return this
  }

  v(ref: string, p: string, value: number, n = '0', ac?: number): this {
    this.builder.voltageSource({ ref, p, n, value, stage: 'source', ...(ac === undefined ? {} : { ac }) })
    return this
  }

  i(ref: string, from: string, to: string, value: number, ac?: number): this {
    this.builder.currentSource({ ref, from, to, value, stage: 'source', ...(ac === undefined ? {} : { ac }) })
    return this
  }

  e(ref: string, p: string, n: string, cp: string, cn: string, gain: number): this {
    this.builder.controlledVoltageSource({ ref, p, n, cp, cn, gain, stage: 'source' })
    return this
  }

  u(ref: string, p: string, m: string, out: string, part: AmplifierPart = this.part): this {
    this.builder.amplifier({ ref, p, m, out, vpos: 'vpos', vneg: 'vneg', part, stage: 'S1' })
    return this
  }

  build(output = 'adc', negative = '0', title = 'test network'): Network {
    return this.builder.build({ title, output: { p: output, n: negative }, temperature: 25 })
  }
}

/** Networks of every element kind, one per way of conditioning a signal, with AC drive on the sensor. */
export function sampleNetworks(): Record<string, Network> {
  const part = buildAmplifierPart({ ib: 2e-8, rin: 2e6, rcm: 4e8, a0: 2e5 })
  const drive = (bench: Bench, value: number) =>
    bench.v('VSENSE', 'sense', value, '0', 1).v('VREF', 'vref', 2.5)
  return {
    divider: drive(new Bench(), 1.3)
      .r('R1', 'sense', 'adc', 22e3)
      .r('R2', 'adc', '0', 10e3)
      .c('C1', 'adc', '0', 1e-9)
      .build(),
    follower: drive(new Bench(part), 1.3)
      .r('RSENSE', 'sense', 'in', 600)
      .u('U1', 'in', 'adc', 'adc')
      .r('RL', 'adc', '0', 1e5)
      .build(),
    'non-inverting': drive(new Bench(part), 0.2)
      .u('U1', 'sense', 'fb', 'adc')
      .r('RG', 'fb', '0', 1e3)
      .r('RF', 'adc', 'fb', 9.1e3)
      .build(),
    'non-inverting, offset up': drive(new Bench(part), 0.5)
      .r('R1', 'sense', 'p', 1e4)
      .r('R2', 'vref', 'p', 1.8e5)
      .r('RG', 'm', '0', 1e4)
      .r('RF', 'adc', 'm', 2.7e4)
      .u('U1', 'p', 'm', 'adc')
      .build(),
    'non-inverting, offset down': drive(new Bench(part), 0.4)
      .r('R1', 'vref', 'x', 7.5e4)
      .r('R2', 'x', '0', 820)
      .r('RG', 'x', 'm', 2e4)
      .r('RF', 'adc', 'm', 1.8e5)
      .u('U1', 'sense', 'm', 'adc')
      .build(),
    'inverting, offset up': drive(new Bench(part), -0.6)
      .r('RG', 'sense', 'm', 1e4)
      .r('RF', 'adc', 'm', 3.3e4)
      .c('CF', 'adc', 'm', 1e-10)
      .r('R1', 'vref', 'p', 1e4)
      .r('R2', 'p', '0', 4.7e3)
      .u('U1', 'p', 'm', 'adc')
      .build(),
    difference: drive(new Bench(part), 0.05)
      .v('VCM', 'cm', 1.2)
      .e('EP', 'sp', 'cm', 'sense', '0', 0.5)
      .e('EN', 'sn', 'cm', 'sense', '0', -0.5)
      .r('R1', 'sn', 'm', 1e4)
      .r('R2', 'm', 'adc', 1e5)
      .r('R3', 'sp', 'p', 1e4)
      .r('R4', 'p', 'vref', 1e5)
      .u('U1', 'p', 'm', 'adc')
      .build(),
    'three amplifiers': drive(new Bench(part), 0.01)
      .v('VCM', 'cm', 2.4)
      .e('EP', 'sp', 'cm', 'sense', '0', 0.5)
      .e('EN', 'sn', 'cm', 'sense', '0', -0.5)
      .u('U1', 'sp', 'm1', 'o1')
      .u('U2', 'sn', 'm2', 'o2')
      .r('R1', 'o1', 'm1', 1e4)
      .r('R2', 'o2', 'm2', 1e4)
      .r('RG', 'm1', 'm2', 402)
      .r('R3', 'o2', 'm3', 1e4)
      .r('R4', 'm3', 'o3', 1e4)
      .r('R5', 'o1', 'p3', 1e4)
      .r('R6', 'p3', 'lev', 1e4)
      .u('U3', 'p3', 'm3', 'o3')
      .r('R7', 'vref', 'dv', 1e4)
      .r('R8', 'dv', '0', 6.8e3)
      .u('U4', 'dv', 'lev', 'lev')
      .r('R9', 'o3', 'adc', 1e3)
      .c('C1', 'adc', '0', 1e-8)
      .r('RL', 'adc', '0', 1e6)
      .build(),
    transimpedance: new Bench(part)
      .i('ISENSE', '0', 'sense', 2e-6, 1e-6)
      .c('CD', 'sense', '0', 1e-10)
      .u('U1', '0', 'sense', 'adc')
      .r('RF', 'adc', 'sense', 4.7e5)
      .c('CF', 'adc', 'sense', 2e-12)
      .build(),
    'loop shunt': new Bench(part)
      .i('ISENSE', '0', 'sense', 0.012, 1e-3)
      .r('RS', 'sense', '0', 100)
      .r('R1', 'sense', 'p', 1e3)
      .c('C1', 'p', '0', 1e-7)
      .u('U1', 'p', 'm', 'adc')
      .r('RG', 'm', '0', 1e4)
      .r('RF', 'adc', 'm', 1.2e4)
      .build(),
    'second-order low-pass': drive(new Bench(part), 1)
      .r('R1', 'sense', 'a', 11250)
      .r('R2', 'a', 'b', 11250)
      .c('C1', 'a', 'adc', 2e-9)
      .c('C2', 'b', '0', 1e-9)
      .u('U1', 'b', 'adc', 'adc')
      .build(),
    'ideal output resistance': drive(
      new Bench(buildAmplifierPart({ rout: 0, cin: { common: 0, differential: 0 } })),
      0.3,
    )
      .u('U1', 'sense', 'fb', 'adc')
      .r('RG', 'fb', 'vref', 1e4)
      .r('RF', 'adc', 'fb', 2e4)
      .build(),
    'differential output': drive(new Bench(part), 0.7)
      .u('U1', 'sense', 'adcp', 'adcp')
      .r('R1', 'adcp', 'm', 1e4)
      .r('R2', 'm', 'adcn', 1e4)
      .u('U2', 'vref', 'm', 'adcn')
      .build('adcp', 'adcn'),
  }
}

import type { BenchModel } from '../model/bench-model.ts'
import type { MeterModel } from '../model/meter-model.ts'
import { ripple } from '../model/ripple.ts'
import type { SupplyOutput } from '../model/supply-output.ts'
import { type Command, command, nothing } from '../scpi/commands.ts'
import { ScpiDevice } from '../scpi/device.ts'

/** Positive infinity of SCPI-1999: out of the meter's range. */
const overload = '+9.9E+37'

/** The voltmeter across anode and cathode. */
export function createAnodeMeter(bench: BenchModel, advance: () => void): ScpiDevice {
  return createMeter(bench, advance, 'VOLT METER', () =>
    measureCommand('MEASure[:SCALar]:VOLTage[:DC]?', bench, bench.anodeMeter, bench.outputs.anode, () =>
      bench.faults.has('meter-frozen'),
    ),
  )
}

/** The ammeter in the lead from the supply to the polarity relay: it shows the same sign whichever way the relay is. */
export function createCoilMeter(bench: BenchModel, advance: () => void): ScpiDevice {
  return createMeter(bench, advance, 'AMPERE METER', () =>
    measureCommand(
      'MEASure[:SCALar]:CURRent[:DC]?',
      bench,
      bench.coilMeter,
      bench.outputs.coils,
      () => false,
    ),
  )
}

/** The unit that holds the contacts of e-stop (1) and enclosure (2): 1 is a closed contact. */
export function createInterlockUnit(bench: BenchModel, advance: () => void): ScpiDevice {
  return new ScpiDevice({
    identity: identityOf(bench, 'INTERLOCK UNIT'),
    beforeMessage: advance,
    commands: () => [
      command(
        'INTerlock:STATe?',
        (parameters, suffix) => parameters.channels(2, suffix),
        (contacts) =>
          contacts
            .map((contact) => ((contact === 1 ? bench.isEStopIn : bench.isEnclosureOpen) ? '0' : '1'))
            .join(','),
      ),
    ],
  })
}

function createMeter(
  bench: BenchModel,
  advance: () => void,
  model: string,
  measure: () => Command,
): ScpiDevice {
  return new ScpiDevice({
    identity: identityOf(bench, model),
    beforeMessage: advance,
    commands: () => [measure()],
  })
}

function measureCommand(
  header: string,
  bench: BenchModel,
  meter: MeterModel,
  source: SupplyOutput,
  isFrozen: () => boolean,
): Command {
  return command(header, nothing, () => {
    const peak = source.isOn ? source.scenario.ripple : 0
    return meter.text(
      ripple(peak, meter.scenario.settlingSeconds, bench.elapsedSeconds),
      overload,
      isFrozen(),
    )
  })
}

function identityOf(bench: BenchModel, model: string): [string, string, string, string] {
  return ['COILSIDE', model, bench.scenario.benchId.toUpperCase(), '1.0']
}

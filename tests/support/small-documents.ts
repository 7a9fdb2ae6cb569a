/*
 * A small, whole set of documents that has every kind of step: an inline-four of an invented maker.
 * For tests of the rules; the shipped documents are larger and may change.
 */
import { compilePlan } from '@/domain/compile-plan';
import {
  engineSchema,
  procedureSchema,
  routeSchema,
  type EngineSheet,
  type Procedure,
  type Route,
} from '@/domain/document';
import type { Plan } from '@/domain/plan';

const source = { document: 'Data sheet T4', page: '3', dated: '2026-01-12', checkedBy: 'Aino Test' };

/** The engine sheet of the small set: rods 1 and 4, then 2 and 3; two bolts a cap; two cycles. */
export function smallEngine(): EngineSheet {
  return engineSchema.parse({
    kind: 'engine',
    id: 'test-four',
    revision: 1,
    name: 'Testwell T4',
    code: 'T4',
    layout: 'inline',
    cylinders: 4,
    firingOrder: [1, 3, 4, 2],
    rotation: 'clockwise, seen from the front',
    crankpins: [
      { pin: 1, angle: 0, rods: [{ rod: 1, bankAxis: 0 }] },
      { pin: 2, angle: 180, rods: [{ rod: 2, bankAxis: 0 }] },
      { pin: 3, angle: 180, rods: [{ rod: 3, bankAxis: 0 }] },
      { pin: 4, angle: 0, rods: [{ rod: 4, bankAxis: 0 }] },
    ],
    capReach: 30,
    capBolts: [
      { bolt: 'A', sits: 'left' },
      { bolt: 'B', sits: 'right' },
    ],
    markColour: 'yellow',
    boltSets: [
      { set: 'old', tightenings: 4, source },
      { set: 'new', tightenings: 2, source },
    ],
    measuringBolts: 'old',
    shells: {
      standard: 'blue',
      grades: [
        { grade: 'red', wall: '-0.004' },
        { grade: 'blue', wall: '0.000' },
        { grade: 'black', wall: '0.004' },
      ],
      source,
    },
    card: {
      thread: 'fine thread',
      threadDiameter: '0.300',
      range: { low: '0.020', high: '0.080' },
      bands: [
        { width: '3.534', clearance: '0.020' },
        { width: '2.356', clearance: '0.030' },
        { width: '1.767', clearance: '0.040' },
        { width: '1.414', clearance: '0.050' },
        { width: '1.178', clearance: '0.060' },
        { width: '1.010', clearance: '0.070' },
        { width: '0.884', clearance: '0.080' },
      ],
      source,
    },
    limits: {
      rodClearance: {
        title: 'oil clearance',
        unit: 'mm',
        low: '0.030',
        high: '0.070',
        target: '0.048',
        uncertainty: '0.005',
        taper: '0.010',
        spread: '0.015',
        source,
      },
      sideClearance: { title: 'side clearance', unit: 'mm', missing: 'The maker gives none.' },
      oilPressure: { title: 'oil pressure', unit: 'bar', low: '1.2', source },
    },
    programmes: {
      rodCap: {
        title: 'Rod cap',
        thread: 'oiled',
        cycles: [
          [
            { kind: 'torque', target: '10', tolerance: '1' },
            { kind: 'angle', target: '80', tolerance: '5' },
            { kind: 'release' },
          ],
          [
            { kind: 'torque', target: '10', tolerance: '1' },
            { kind: 'angle', target: '80', tolerance: '5' },
            { kind: 'mark', colour: 'yellow' },
          ],
        ],
        source,
      },
      rodCapMeasuring: {
        title: 'Rod cap, measuring fit',
        thread: 'oiled',
        cycles: [[{ kind: 'torque', target: '24', tolerance: '1' }]],
        source,
      },
      rodCapInterim: {
        title: 'Rod cap, interim fit',
        thread: 'oiled',
        cycles: [[{ kind: 'torque', target: '5', tolerance: '1' }]],
        source,
      },
      sump: {
        title: 'Sump',
        thread: 'dry',
        cycles: [[{ kind: 'torque', target: '12', tolerance: '2' }]],
        source,
      },
    },
    fluids: {
      engineOil: { title: 'Engine oil', specification: 'Test 5W-30', quantity: '4.2', unit: 'L', source },
    },
    figures: {
      warmUp: { title: 'Warm-up', value: '15', unit: 'min', source },
      roadTest: { title: 'Road test', value: '20', unit: 'km', source },
    },
  });
}

const check = (id: string, ask: string) => ({ id, ask });

/** The two procedures of the small set. */
export function smallProcedures(): Procedure[] {
  const strip = {
    kind: 'procedure',
    id: 'strip',
    revision: 1,
    name: 'Strip and measure',
    sections: [
      {
        id: 'prepare',
        name: 'Prepare',
        order: 'free',
        steps: [
          {
            id: 'arrival',
            kind: 'photograph',
            title: 'Photograph the arrival',
            subject: 'arrival',
            identity: true,
          },
          { id: 'old-shell-kit', kind: 'fit', title: 'Shells on the trolley', part: 'shells', count: 8 },
          {
            id: 'rags-out',
            kind: 'count',
            title: 'Count rags out',
            tally: 'rags',
            what: 'rags',
            side: 'out',
          },
        ],
      },
      {
        id: 'underside',
        name: 'Underside',
        steps: [
          { id: 'raise', kind: 'do', title: 'Raise the vehicle', moves: true, class: 'B' },
          {
            id: 'strap',
            kind: 'place',
            title: 'Strap it to the lift',
            item: 'strap',
            bars: ['move', 'handover'],
          },
          { id: 'tray-off', kind: 'remove', title: 'Tray off', item: 'tray', count: 8, into: 'rack 1' },
          {
            id: 'plate-off',
            kind: 'remove',
            title: 'Plate off',
            item: 'plate',
            oneUse: true,
            when: { option: 'plate', is: 'fitted' },
          },
          { id: 'sump-off', kind: 'remove', title: 'Sump off', item: 'sump', bars: ['start', 'handover'] },
          { id: 'look', kind: 'witness', title: 'First look', holdPoint: 'first-look', meaning: 'I looked.' },
        ],
      },
      {
        id: 'rods',
        name: 'Rod by rod',
        loop: 'rods',
        steps: [
          { id: 'turn-to', kind: 'turn', title: 'Turn the crank to {angle}° for rods {rods}', class: 'A' },
          {
            id: 'cap-off',
            kind: 'do',
            title: 'Rod {rod}: cap and shells off',
            sets: { cap: 'off', shells: 'out' },
            class: 'A',
          },
          {
            id: 'shell-look',
            kind: 'inspect',
            each: 'shell',
            title: 'Shell {rod}{half}',
            checks: [check('sound', 'Is shell {rod}{half} sound?')],
          },
          {
            id: 'choose',
            kind: 'choose-shells',
            title: 'Rod {rod}: shells',
            class: 'A',
            sets: { shells: 'dry' },
          },
          { id: 'lay', kind: 'do', title: 'Rod {rod}: thread laid', class: 'A', sets: { thread: 'laid' } },
          { id: 'cap-on', kind: 'do', title: 'Rod {rod}: cap on', class: 'A', sets: { cap: 'on' } },
          {
            id: 'squeeze',
            kind: 'tighten',
            title: 'Rod {rod}: measuring fit',
            class: 'A',
            programme: 'rodCapMeasuring',
            fit: 'measuring',
          },
          { id: 'cap-off-again', kind: 'do', title: 'Rod {rod}: cap off', class: 'A', sets: { cap: 'off' } },
          {
            id: 'gauge',
            kind: 'gauge',
            title: 'Rod {rod}: oil clearance',
            class: 'A',
            limit: 'rodClearance',
            measureAgainFrom: 'lay',
            reworkFrom: 'choose',
          },
          {
            id: 'clean',
            kind: 'do',
            title: 'Rod {rod}: thread gone, oiled, cap on',
            class: 'A',
            sets: { thread: 'gone', shells: 'oiled', cap: 'on' },
          },
          {
            id: 'nip',
            kind: 'tighten',
            title: 'Rod {rod}: interim fit',
            class: 'A',
            programme: 'rodCapInterim',
            fit: 'interim',
          },
        ],
      },
      {
        id: 'together',
        name: 'All rods together',
        steps: [{ id: 'grade', kind: 'grade-shells', title: 'Old shells side by side', class: 'B' }],
      },
      {
        id: 'at-any-time',
        name: 'At any time',
        onDemand: true,
        steps: [
          {
            id: 'park',
            kind: 'make-safe',
            title: 'Make safe',
            class: 'A',
            checks: [check('stand', 'On its locks?')],
          },
          {
            id: 'resume',
            kind: 'resume',
            title: 'Resume',
            class: 'A',
            checks: [check('same', 'As it was left?')],
          },
        ],
      },
    ],
  };
  const build = {
    kind: 'procedure',
    id: 'build',
    revision: 2,
    name: 'Build and try',
    sections: [
      {
        id: 'caps',
        name: 'Caps',
        loop: 'rods',
        steps: [
          { id: 'turn-to', kind: 'turn', title: 'Turn the crank to {angle}°', class: 'A' },
          {
            id: 'tighten',
            kind: 'tighten',
            title: 'Rod {rod}: final fit',
            class: 'A',
            programme: 'rodCap',
            fit: 'final',
          },
          {
            id: 'side',
            kind: 'read',
            title: 'Rod {rod}: side clearance',
            class: 'B',
            limit: 'sideClearance',
          },
        ],
      },
      {
        id: 'close',
        name: 'Close',
        steps: [
          { id: 'turns', kind: 'turn', title: 'Two full turns', fullTurns: 2, class: 'A' },
          {
            id: 'caps-marked',
            kind: 'hold',
            title: 'Caps marked',
            class: 'A',
            holdPoint: 'caps-marked',
            meaning: 'I looked at each head at the vehicle and counted {count} marks.',
            counts: { what: 'marks', expect: 'marks' },
          },
          { id: 'rags-in', kind: 'count', title: 'Count rags in', tally: 'rags', what: 'rags', side: 'in' },
          {
            id: 'clear-to-close',
            kind: 'hold',
            title: 'Clear to close',
            class: 'A',
            holdPoint: 'clear-to-close',
            meaning: 'Nothing was left inside.',
            gate: 'close',
            covers: ['strip', 'caps', 'rags-in'],
          },
          { id: 'sump-on', kind: 'refit', title: 'Sump on', item: 'sump', part: 'sump gasket' },
          {
            id: 'sump-bolts',
            kind: 'tighten',
            title: 'Sump bolts',
            class: 'B',
            programme: 'sump',
            fit: 'joint',
            bolts: ['sump bolts 1 to 12'],
          },
          {
            id: 'plate-on',
            kind: 'refit',
            title: 'Plate on',
            item: 'plate',
            part: 'plate bolts',
            when: { option: 'plate', is: 'fitted' },
          },
          { id: 'tray-on', kind: 'refit', title: 'Tray on', item: 'tray', count: 8 },
          { id: 'strap-out', kind: 'remove', title: 'Strap off', item: 'strap' },
        ],
      },
      {
        id: 'run',
        name: 'Run',
        steps: [
          {
            id: 'oil',
            kind: 'fill',
            title: 'Fill {fluid.engineOil.quantity} L',
            fluid: 'engineOil',
            class: 'A',
          },
          {
            id: 'clear-to-start',
            kind: 'hold',
            title: 'Clear to start',
            class: 'A',
            holdPoint: 'clear-to-start',
            meaning: 'It may be started.',
            gate: 'start',
          },
          {
            id: 'warm',
            kind: 'watch',
            title: 'Warm up for {minutes} minutes',
            class: 'A',
            minutes: 'warmUp',
            cautions: [{ word: 'DANGER', text: 'Exhaust gas kills. Extraction on.' }],
            checks: [
              { id: 'pressure', atSeconds: 15, limit: 'oilPressure', stop: true },
              { id: 'leaks', atSeconds: 300, ask: 'Dry from below?' },
            ],
          },
          {
            id: 'drive',
            kind: 'drive',
            title: 'Drive {distance} km',
            class: 'A',
            moves: true,
            distance: 'roadTest',
            before: [check('brakes', 'Do the brakes hold?')],
            after: [check('quiet', 'Is it quiet?')],
          },
          {
            id: 'hand-over',
            kind: 'hand-over',
            title: 'Hand over',
            checks: [check('parts', 'Old parts packed?')],
          },
        ],
      },
    ],
  };
  return [procedureSchema.parse(strip), procedureSchema.parse(build)];
}

/** The route of the small set: one option, three hold points and a witness point. */
export function smallRoute(): Route {
  const point = (id: string, name: string, offline: 'wait' | 'proceed') => ({
    id,
    name,
    roles: ['supervisor'],
    offline,
    secondLook: true,
  });
  return routeSchema.parse({
    kind: 'route',
    id: 'test-route',
    revision: 1,
    name: 'Rod bearings, Testwell T4',
    engine: 'test-four',
    procedures: ['strip', 'build'],
    options: [
      {
        id: 'plate',
        ask: 'Is a stiffening plate fitted?',
        choices: [
          { id: 'fitted', label: 'fitted' },
          { id: 'none', label: 'not fitted' },
        ],
      },
    ],
    holdPoints: [
      point('first-look', 'First look', 'proceed'),
      point('caps-marked', 'Caps marked', 'proceed'),
      point('clear-to-close', 'Clear to close', 'wait'),
      point('clear-to-start', 'Clear to start', 'wait'),
    ],
  });
}

/** Stand-in content hashes: sixty-four of one digit a document. */
export const smallHashes: Record<string, string> = {
  'test-four': '1'.repeat(64),
  strip: '2'.repeat(64),
  build: '3'.repeat(64),
  'test-route': '4'.repeat(64),
};

/** The compiled plan of the small set. */
export function smallPlan(plate: 'fitted' | 'none' = 'fitted'): Plan {
  return compilePlan({
    route: smallRoute(),
    procedures: smallProcedures(),
    engine: smallEngine(),
    options: { plate },
    hashes: smallHashes,
  });
}

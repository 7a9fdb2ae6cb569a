import { describe, expect, it } from 'vitest';
import { stringify } from 'yaml';
import { checkDocuments, combine, type DocumentFile } from './check-documents';
import type { EngineSheet, Procedure, ProcedureStep, Route } from './document';
import { smallEngine, smallProcedures, smallRoute } from '../../tests/support/small-documents';

interface Documents {
  engine: EngineSheet;
  strip: Procedure;
  build: Procedure;
  route: Route;
}

function documents(): Documents {
  const [strip, build] = smallProcedures();
  return { engine: smallEngine(), strip: strip!, build: build!, route: smallRoute() };
}

/** The small set as YAML files, after a change to the documents and one to the text of a file. */
function files(
  change?: (documents: Documents) => void,
  edit?: [file: string, from: string, to: string],
): DocumentFile[] {
  const changed = documents();
  change?.(changed);
  return Object.entries(changed).map(([name, document]) => {
    const text = stringify(document, { aliasDuplicateObjects: false, lineWidth: 0 });
    if (edit?.[0] !== name) return { file: `${name}.yaml`, text };
    expect(text.split(edit[1]), `"${edit[1]}" must be in ${name}.yaml once`).toHaveLength(2);
    return { file: `${name}.yaml`, text: text.replace(edit[1], edit[2]) };
  });
}

/** The number of the only line of a file that contains the words. */
function lineWith(all: DocumentFile[], file: string, words: string): number {
  const lines = all.find((one) => one.file === file)!.text.split('\n');
  const found = lines.flatMap((line, index) => (line.includes(words) ? [index + 1] : []));
  expect(found, `"${words}" in ${file}`).toHaveLength(1);
  return found[0]!;
}

function step(procedure: Procedure, id: string): ProcedureStep {
  return procedure.sections.flatMap(({ steps }) => steps).find((one) => one.id === id)!;
}

function stepOf<K extends ProcedureStep['kind']>(procedure: Procedure, id: string, kind: K) {
  const found = step(procedure, id);
  if (found.kind !== kind) throw new Error(`"${id}" is no ${kind} step.`);
  return found as Extract<ProcedureStep, { kind: K }>;
}

function drop(procedure: Procedure, id: string): void {
  for (const section of procedure.sections) section.steps = section.steps.filter((one) => one.id !== id);
}

interface Broken {
  rule: string;
  change?: (documents: Documents) => void;
  edit?: [file: string, from: string, to: string];
  /** The file, and words that stand in the line that is told. */
  at: [file: string, words: string];
  says: string;
  mend: string;
  /** Told as a warning only. */
  warns?: true;
}

function expectTold({ change, edit, at: [file, words], says, mend, warns }: Broken): void {
  const all = files(change, edit);
  const { problems, warnings } = checkDocuments(all);
  const line = lineWith(all, file, words);
  expect(warns ? warnings : problems).toContainEqual({ file, line, message: says, mend });
  if (warns) expect(problems).toEqual([]);
}

it('finds nothing wrong with a set that is whole', () => {
  const { problems, warnings, documents: read } = checkDocuments(files());
  expect(problems).toEqual([]);
  expect(warnings).toEqual([]);
  expect(read.map(({ file, document }) => [file, document.id])).toEqual([
    ['engine.yaml', 'test-four'],
    ['strip.yaml', 'strip'],
    ['build.yaml', 'build'],
    ['route.yaml', 'test-route'],
  ]);
});

const writing: Broken[] = [
  {
    rule: 'a field that does not belong',
    edit: ['engine', 'code: T4', 'codename: T4'],
    at: ['engine.yaml', 'codename: T4'],
    says: '"codename" is not a field that belongs here.',
    mend: 'Correct its spelling, or take it out.',
  },
  {
    rule: 'a field that is missing',
    edit: ['engine', 'code: T4\n', ''],
    at: ['engine.yaml', 'kind: engine'],
    says: '"code" is missing.',
    mend: 'Add it: text.',
  },
  {
    rule: 'a figure without quotation marks',
    edit: ['engine', 'target: "0.048"', 'target: 0.048'],
    at: ['engine.yaml', 'target: 0.048'],
    says: '"target" of "rodClearance" of "limits" must be text.',
    mend: 'Put it in quotation marks: "0.048".',
  },
  {
    rule: 'a figure that is no decimal',
    edit: ['engine', 'target: "0.048"', 'target: about 0.05'],
    at: ['engine.yaml', 'target: about 0.05'],
    says: '"target" of "rodClearance" of "limits" can\'t be "about 0.05".',
    mend: 'Write a decimal in quotation marks, such as "0.050".',
  },
  {
    rule: 'a word that is not one of the choices',
    edit: ['engine', 'layout: inline', 'layout: flat'],
    at: ['engine.yaml', 'layout: flat'],
    says: '"layout" can\'t be "flat".',
    mend: 'Write one of: inline, vee.',
  },
  {
    rule: 'a kind of step that does not exist',
    edit: ['strip', 'kind: gauge', 'kind: guess'],
    at: ['strip.yaml', 'kind: guess'],
    says: '"kind" of "gauge" of "rods" can\'t be "guess".',
    mend:
      'Write one of: do, remove, refit, place, count, inspect, read, turn, gauge, choose-shells, grade-shells, ' +
      'tighten, fit, fill, photograph, watch, drive, hold, witness, make-safe, resume, hand-over.',
  },
  {
    rule: 'a kind of document that does not exist',
    edit: ['route', 'kind: route', 'kind: rout'],
    at: ['route.yaml', 'kind: rout'],
    says: '"kind" can\'t be "rout".',
    mend: 'Write one of: engine, procedure, route.',
  },
  {
    rule: 'a list that is empty',
    change: ({ engine }) => (engine.capBolts = []),
    at: ['engine.yaml', 'capBolts'],
    says: '"capBolts" has too few entries.',
    mend: 'Give at least 1.',
  },
  {
    rule: 'a text that is empty',
    edit: ['route', 'name: Rod bearings, Testwell T4', 'name: ""'],
    at: ['route.yaml', 'name: ""'],
    says: '"name" is empty.',
    mend: 'Write something, or take the field out.',
  },
  {
    rule: 'a count that is not whole',
    edit: ['strip', 'revision: 1', 'revision: 1.5'],
    at: ['strip.yaml', 'revision: 1.5'],
    says: '"revision" must be a whole number.',
    mend: 'Write a whole number.',
  },
  {
    rule: 'a name that can not be used',
    edit: ['engine', 'oilPressure:', 'oil-pressure:'],
    at: ['engine.yaml', 'oil-pressure:'],
    says: '"oil-pressure" of "limits" is not a name that can be used here.',
    mend: 'Write one camelCase word, such as "rodClearance".',
  },
  {
    rule: 'a letter in two pieces',
    edit: ['route', 'Rod bearings, Testwell', 'Rod bearings, Te\u0301stwell'],
    at: ['route.yaml', 'Te\u0301stwell'],
    says: 'A letter here is written as a letter and a loose accent.',
    mend: 'Save the file in Unicode form NFC.',
  },
];

describe('how a document is written', () => {
  it.each(writing)('tells $rule, with file, line and mend', expectTold);

  it('tells YAML that is not well-formed, with file, line and mend', () => {
    const { problems } = checkDocuments([{ file: 'a.yaml', text: 'kind: route\nname: [one, two\nid: x\n' }]);
    expect(problems[0]).toMatchObject({ file: 'a.yaml', line: 3 });
    expect(problems[0]!.message).toMatch(/^This is not well-formed YAML: /);
    expect(problems[0]!.mend).toContain('indentation');
  });

  it('tells a key that is there twice', () => {
    const { problems } = checkDocuments([{ file: 'a.yaml', text: 'kind: route\nid: x\nid: y\n' }]);
    expect(problems).toHaveLength(1);
    expect(problems[0]).toMatchObject({
      line: 3,
      message: 'This is not well-formed YAML: Map keys must be unique.',
    });
  });

  it('follows an alias to the line of what it stands for', () => {
    const text = 'kind: route\nname: &n 5\nid: *n\n';
    const { problems } = checkDocuments([{ file: 'a.yaml', text }]);
    expect(
      problems.filter(({ message }) => message.includes('must be text')).map(({ line }) => line),
    ).toEqual([2, 3]);
  });

  it('takes an empty file, a bomb of aliases and plain text for what they are', () => {
    const bomb = `a: &a [x, x, x, x, x, x, x, x, x]\n${'bcdefghi'
      .split('')
      .map((name, i) => `${name}: &${name} [${Array<string>(9).fill(`*${'abcdefgh'[i]}`).join(', ')}]`)
      .join('\n')}\n`;
    for (const text of ['', bomb, 'just words', '- 1\n- 2\n']) {
      const { problems, documents: read } = checkDocuments([{ file: 'a.yaml', text }]);
      expect(problems.length).toBeGreaterThan(0);
      expect(read).toEqual([]);
    }
  });

  it('says nothing of missing documents while one of them can not be read', () => {
    const { problems } = checkDocuments(files(undefined, ['engine', 'code: T4', 'codename: T4']));
    expect(problems.map(({ file }) => file)).toEqual(['engine.yaml', 'engine.yaml']);
  });
});

const sheet: Broken[] = [
  {
    rule: 'a low limit above the high one',
    change: ({ engine }) => (engine.limits.rodClearance!.low = '0.071'),
    at: ['engine.yaml', 'low: "0.071"'],
    says: 'The limit "rodClearance" has its low end 0.071 at or above its high end 0.070.',
    mend: 'Swap or correct the two figures.',
  },
  {
    rule: 'a target outside its limits',
    change: ({ engine }) => (engine.limits.rodClearance!.target = '0.0700'),
    at: ['engine.yaml', 'target: "0.0700"'],
    says: 'The target 0.0700 of "rodClearance" is not between its limits.',
    mend: 'Write a target between low and high.',
  },
  {
    rule: 'an uncertainty that swallows the band',
    change: ({ engine }) => (engine.limits.rodClearance!.uncertainty = '0.020'),
    at: ['engine.yaml', 'uncertainty: "0.020"'],
    says: 'The uncertainty 0.020 of "rodClearance" leaves no reading that is surely inside 0.030 to 0.070.',
    mend: 'Name a finer way of measuring: the uncertainty must be less than half the band.',
  },
  {
    rule: 'a taper of nothing',
    change: ({ engine }) => (engine.limits.rodClearance!.taper = '0'),
    at: ['engine.yaml', 'taper: "0"'],
    says: 'The taper of "rodClearance" must be more than nothing.',
    mend: 'Write a figure above zero, or take it out.',
  },
  {
    rule: 'a limit without figure or reason',
    change: ({ engine }) => delete engine.limits.sideClearance!.missing,
    at: ['engine.yaml', 'sideClearance:'],
    says: 'The limit "sideClearance" has no figure and doesn\'t say why.',
    mend: 'Add "low" and "high", or say in "missing" why there is none.',
  },
  {
    rule: 'a limit without a source',
    change: ({ engine }) => delete engine.limits.oilPressure!.source,
    at: ['engine.yaml', 'oilPressure:'],
    says: 'The limit "oilPressure" has no source.',
    mend: 'Add "source" with document, page, day and who checked it.',
  },
  {
    rule: 'a release at the end of the last cycle',
    change: ({ engine }) => {
      engine.programmes.rodCap!.cycles.shift();
      engine.programmes.sump!.cycles[0]!.push({ kind: 'release' });
    },
    at: ['engine.yaml', '- kind: release'],
    says: 'The last cycle of "sump" is released: nothing would hold.',
    mend: 'Take the release out of the last cycle.',
  },
  {
    rule: 'a torque that falls within a cycle',
    change: ({ engine }) =>
      engine.programmes.sump!.cycles[0]!.push({ kind: 'torque', target: '11.5', tolerance: '1' }),
    at: ['engine.yaml', 'target: "11.5"'],
    says: 'The torque falls from 12 to 11.5 within a cycle of "sump".',
    mend: 'Put the passes in rising order.',
  },
  {
    rule: 'a target of nothing',
    change: ({ engine }) =>
      (engine.programmes.sump!.cycles = [[{ kind: 'torque', target: '0.0', tolerance: '1' }]]),
    at: ['engine.yaml', 'target: "0.0"'],
    says: 'A target of "sump" is not above zero.',
    mend: 'Write the figure of the data sheet.',
  },
  {
    rule: 'a tolerance as large as its target',
    change: ({ engine }) =>
      (engine.programmes.sump!.cycles = [[{ kind: 'torque', target: '12', tolerance: '12.0' }]]),
    at: ['engine.yaml', 'tolerance: "12.0"'],
    says: 'The tolerance 12.0 of "sump" makes no sense for 12.',
    mend: 'Write a tolerance above zero and below the target.',
  },
  {
    rule: 'a cycle that tightens nothing',
    change: ({ engine }) => (engine.programmes.sump!.cycles = [[{ kind: 'mark', colour: 'green' }]]),
    edit: ['engine', '- kind: mark\n          colour: green', '- { kind: mark, colour: green }'],
    at: ['engine.yaml', 'colour: green }'],
    says: 'Cycle 1 of "sump" tightens nothing.',
    mend: 'Add a torque or an angle to it.',
  },
  {
    rule: 'card bands out of order',
    change: ({ engine }) => (engine.card.bands[2]!.width = '2.400'),
    at: ['engine.yaml', 'width: "2.400"'],
    says: 'The band 2.400 mm for 0.040 mm is out of order: a wider thread is a smaller clearance.',
    mend: 'List the bands from the widest to the narrowest, clearances rising.',
  },
  {
    rule: 'a card that does not reach the limits',
    change: ({ engine }) => (engine.limits.rodClearance!.high = '0.081'),
    at: ['engine.yaml', 'bands:'],
    says: 'The card reads 0.020 to 0.080 mm and doesn\'t reach the limits of "rodClearance".',
    mend: 'Use a thread whose card covers both limits.',
  },
  {
    rule: 'a thread that is not made for the limits',
    change: ({ engine }) => (engine.card.range.low = '0.035'),
    at: ['engine.yaml', 'range:'],
    says: 'The thread is made for 0.035 to 0.080 mm and doesn\'t reach the limits of "rodClearance".',
    mend: 'Use a thread whose range covers both limits.',
  },
  {
    rule: 'a rod on two crankpins',
    change: ({ engine }) => (engine.crankpins[3]!.rods[0]!.rod = 2),
    at: ['engine.yaml', 'crankpins:'],
    says: 'No crankpin carries rod 4.',
    mend: 'Add each missing rod to its crankpin.',
  },
  {
    rule: 'a firing order that leaves a cylinder out',
    change: ({ engine }) => (engine.firingOrder = [1, 3, 3, 2]),
    at: ['engine.yaml', 'firingOrder:'],
    says: "The firing order doesn't name each of the 4 cylinders once.",
    mend: 'Write each cylinder once.',
  },
  {
    rule: 'a firing order that the crank can not give',
    change: ({ engine }) => engine.crankpins.forEach((pin, index) => (pin.angle = [0, 270, 90, 180][index]!)),
    at: ['engine.yaml', 'firingOrder:'],
    says: 'The firing order takes more than two turns of this crank.',
    mend: 'Compare firing order, pin angles and bank axes with the data sheet; angles count in the running direction.',
    warns: true,
  },
  {
    rule: 'measuring bolts without a limit of tightenings',
    change: ({ engine }) => (engine.measuringBolts = 'measuring'),
    at: ['engine.yaml', 'measuringBolts:'],
    says: 'The measuring fit uses the "measuring" bolts, but "boltSets" doesn\'t say how often they may be tightened.',
    mend: 'Add the set "measuring" with its tightenings to "boltSets".',
  },
  {
    rule: 'a standard grade that is no grade',
    change: ({ engine }) => (engine.shells.standard = 'green'),
    at: ['engine.yaml', 'standard: green'],
    says: 'The standard grade "green" is not among the grades.',
    mend: 'Name one of the grades below it.',
  },
  {
    rule: 'a bolt named twice',
    change: ({ engine }) => (engine.capBolts[1]!.bolt = 'A'),
    at: ['engine.yaml', 'sits: right'],
    edit: ['engine', '  - bolt: A\n    sits: right', '  - {bolt: A, sits: right}'],
    says: 'The bolt "A" is there twice.',
    mend: 'Keep it once.',
  },
  {
    rule: 'a fluid of nothing',
    change: ({ engine }) => (engine.fluids.engineOil!.quantity = '0'),
    at: ['engine.yaml', 'quantity: "0"'],
    says: 'The quantity of "engineOil" must be more than nothing.',
    mend: 'Write the quantity that goes in.',
  },
];

describe('an engine sheet', () => {
  it.each(sheet)('tells $rule, with file, line and mend', expectTold);

  it('tells a cycle that is not released before the next', () => {
    const all = files(({ engine }) => engine.programmes.rodCap!.cycles[0]!.pop());
    const { problems } = checkDocuments(all);
    const line = all[0]!.text.split('\n').findIndex((text) => text.includes('target: "80"')) + 1;
    expect(problems).toEqual([
      {
        file: 'engine.yaml',
        line: line - 1,
        message: 'Cycle 1 of "rodCap" doesn\'t end with its one release.',
        mend: 'End every cycle but the last with a release.',
      },
    ]);
  });

  it('tells a final fit that ends without its paint mark', () => {
    const all = files(({ engine }) => engine.programmes.rodCap!.cycles[1]!.pop());
    const lines = all[0]!.text.split('\n');
    // The last cycle begins in the line after the only release.
    const line = lines.findIndex((text) => text.includes('kind: release')) + 2;
    expect(checkDocuments(all).problems).toEqual([
      {
        file: 'engine.yaml',
        line,
        message: 'The final fit by "rodCap" doesn\'t end with a paint mark.',
        mend: 'Add "kind: mark" as the last stage of its last cycle.',
      },
    ]);
  });
});

const procedures: Broken[] = [
  {
    rule: 'an id used twice',
    change: ({ build }) => (step(build, 'oil').id = 'sump-on'),
    edit: ['build', '      - id: sump-on\n        title: Fill', '      - id: "sump-on"\n        title: Fill'],
    at: ['build.yaml', 'id: "sump-on"'],
    says: 'The id "sump-on" is used twice in this procedure.',
    mend: 'Give this step an id of its own.',
  },
  {
    rule: 'a change of a rod where there is none',
    change: ({ build }) => (step(build, 'oil').sets = { cap: 'on' }),
    at: ['build.yaml', 'sets:'],
    says: '"oil" changes a rod but stands at none.',
    mend: 'Put it in a section with "loop: rods", or add "each: rod".',
  },
  {
    rule: 'a turn that does not say how far',
    change: ({ build }) => delete stepOf(build, 'turns', 'turn').fullTurns,
    at: ['build.yaml', '- id: turns'],
    says: 'The turn "turns" doesn\'t say how far.',
    mend: 'Add "fullTurns", or put it in a section with "loop: rods".',
  },
  {
    rule: 'full turns at the stops of a loop',
    change: ({ build }) => (stepOf(build, 'turn-to', 'turn').fullTurns = 1),
    at: ['build.yaml', '- id: turn-to'],
    says: 'The turn "turn-to" goes to the stops of a loop.',
    mend: 'Take "fullTurns" and "each" out, or move it out of the loop.',
  },
  {
    rule: 'a reading that sends the work to a later step',
    change: ({ strip }) => (stepOf(strip, 'gauge', 'gauge').measureAgainFrom = 'nip'),
    at: ['strip.yaml', 'measureAgainFrom: nip'],
    says: '"nip" is no step of this section that comes before "gauge".',
    mend: 'Name a step of the same section, before this one.',
  },
  {
    rule: 'a joint without bolts',
    change: ({ build }) => delete stepOf(build, 'sump-bolts', 'tighten').bolts,
    at: ['build.yaml', '- id: sump-bolts'],
    says: '"sump-bolts" tightens a joint but names no bolts.',
    mend: 'Add "bolts" with their names.',
  },
  {
    rule: 'a rod cap tightened where there is no rod',
    change: ({ build }) => {
      const bolts = stepOf(build, 'sump-bolts', 'tighten');
      bolts.fit = 'final';
      delete bolts.bolts;
    },
    at: ['build.yaml', '- id: sump-bolts'],
    says: '"sump-bolts" tightens a rod cap but stands at no rod.',
    mend: 'Put it in a section with "loop: rods".',
  },
  {
    rule: 'shells graded side by side at one rod',
    change: ({ strip }) => (step(strip, 'grade').each = 'rod'),
    at: ['strip.yaml', '- id: grade'],
    says: '"grade" grades all shells side by side but stands at one rod.',
    mend: 'Put it in a section without a loop, and take "each" out.',
  },
  {
    rule: 'a grade loop on anything but a part',
    change: ({ build }) => (step(build, 'oil').each = 'grade'),
    at: ['build.yaml', 'each: grade'],
    says: '"oil" can\'t be repeated for each grade.',
    mend: 'Use "each: grade" only on a "fit" step outside a loop.',
  },
  {
    rule: 'parking that stands in the way',
    change: ({ strip }) => delete strip.sections.at(-1)!.onDemand,
    at: ['strip.yaml', '- id: park'],
    says: '"park" would stand in the way of every job.',
    mend: 'Move it to a section with "onDemand: true".',
  },
  {
    rule: 'a rod in words where there is none',
    change: ({ build }) => (step(build, 'oil').title = 'Oil for rod {rod}'),
    at: ['build.yaml', 'Oil for rod {rod}'],
    says: '{rod} has no meaning in "oil".',
    mend: 'Take it out, or move the step to where it has one.',
  },
  {
    rule: 'a check that is there twice',
    change: ({ build }) =>
      stepOf(build, 'hand-over', 'hand-over').checks.push({ id: 'parts', ask: 'Again?' }),
    edit: [
      'build',
      '          - id: parts\n            ask: Again?',
      '          - { id: "parts", ask: Again? }',
    ],
    at: ['build.yaml', 'id: "parts"'],
    says: 'The check "parts" is there twice in "hand-over".',
    mend: 'Give each check an id of its own.',
  },
  {
    rule: 'a timed check that neither asks nor reads',
    change: ({ build }) => delete stepOf(build, 'warm', 'watch').checks[1]!.ask,
    at: ['build.yaml', '- id: leaks'],
    says: 'The check "leaks" must either ask or read a limit.',
    mend: 'Give it "ask" or "limit", and only one of them.',
  },
];

describe('a procedure', () => {
  it.each(procedures)('tells $rule, with file, line and mend', expectTold);
});

const references: Broken[] = [
  {
    rule: 'an engine sheet that is not there',
    change: ({ route }) => (route.engine = 'other'),
    at: ['route.yaml', 'engine: other'],
    says: 'There is no engine sheet "other".',
    mend: 'Correct the id, or add the sheet.',
  },
  {
    rule: 'a procedure that is not there',
    change: ({ route }) => (route.procedures[1] = 'rebuild'),
    at: ['route.yaml', '- rebuild'],
    says: 'There is no procedure "rebuild".',
    mend: 'Correct the id, or add the procedure.',
  },
  {
    rule: 'an id of another document',
    change: ({ route }) => (route.id = 'strip'),
    at: ['route.yaml', 'id: strip'],
    says: 'The id "strip" belongs to strip.yaml already.',
    mend: 'Give this document an id of its own.',
  },
  {
    rule: 'a limit that the sheet does not have',
    change: ({ build }) => (stepOf(build, 'side', 'read').limit = 'sideways'),
    at: ['build.yaml', 'limit: sideways'],
    says: 'The engine sheet "test-four" has no limit "sideways".',
    mend: 'Add it to "limits" of the sheet, or name another.',
  },
  {
    rule: 'a limit in a watch that the sheet does not have',
    change: ({ build }) => (stepOf(build, 'warm', 'watch').checks[0]!.limit = 'pressure'),
    at: ['build.yaml', 'limit: pressure'],
    says: 'The engine sheet "test-four" has no limit "pressure".',
    mend: 'Add it to "limits" of the sheet, or name another.',
  },
  {
    rule: 'a programme that the sheet does not have',
    change: ({ build }) => (stepOf(build, 'tighten', 'tighten').programme = 'cap'),
    at: ['build.yaml', 'programme: cap'],
    says: 'The engine sheet "test-four" has no programme "cap".',
    mend: 'Add it to "programmes" of the sheet, or name another.',
  },
  {
    rule: 'a fluid that the sheet does not have',
    change: ({ build }) => (stepOf(build, 'oil', 'fill').fluid = 'coolant'),
    at: ['build.yaml', 'fluid: coolant'],
    says: 'The engine sheet "test-four" has no fluid "coolant".',
    mend: 'Add it to "fluids" of the sheet, or name another.',
  },
  {
    rule: 'a figure that the sheet does not have',
    change: ({ build }) => (stepOf(build, 'drive', 'drive').distance = 'tour'),
    at: ['build.yaml', 'distance: tour'],
    says: 'The engine sheet "test-four" has no figure "tour".',
    mend: 'Add it to "figures" of the sheet, or name another.',
  },
  {
    rule: 'a name in braces that nobody knows',
    change: ({ build }) => (step(build, 'oil').title = 'Fill {fluid.engineOil.amount} L'),
    at: ['build.yaml', 'engineOil.amount'],
    says: '{fluid.engineOil.amount} is not known on the engine sheet "test-four".',
    mend: 'Correct the name in braces, or add it to the sheet.',
  },
  {
    rule: 'a need that is not there',
    change: ({ build }) => (step(build, 'oil').needs = ['gasket']),
    at: ['build.yaml', '- gasket'],
    says: 'There is no step "gasket" on this route.',
    mend: 'Name a step of this procedure, or write "procedure.step".',
  },
  {
    rule: 'a need that comes later',
    change: ({ build }) => (step(build, 'oil').needs = ['build.warm']),
    at: ['build.yaml', '- build.warm'],
    says: '"build.warm" comes later or is the step itself.',
    mend: 'Name a step that comes before this one.',
  },
  {
    rule: 'a need that is done on demand',
    change: ({ build }) => (step(build, 'oil').needs = ['strip.park']),
    at: ['build.yaml', '- strip.park'],
    says: '"strip.park" is done on demand; nothing can wait for it.',
    mend: 'Name another step, or none.',
  },
  {
    rule: 'evidence that is not there',
    change: ({ build }) => (stepOf(build, 'caps-marked', 'hold').covers = ['caps.all']),
    at: ['build.yaml', '- caps.all'],
    says: 'There is nothing called "caps.all" on this route to cover.',
    mend: 'Name a step, a section or a procedure.',
  },
  {
    rule: 'evidence that comes later',
    change: ({ build }) => (stepOf(build, 'caps-marked', 'hold').covers = ['caps', 'build.warm']),
    at: ['build.yaml', '- build.warm'],
    says: '"build.warm" can\'t be evidence here: it comes later.',
    mend: 'Name what comes before this hold point.',
  },
  {
    rule: 'an option that the route never asks',
    change: ({ build }) => (step(build, 'oil').when = { option: 'roof', is: 'open' }),
    at: ['build.yaml', 'option: roof'],
    says: 'The route "test-route" never asks for "roof".',
    mend: 'Add the option to the route, or take "when" out.',
  },
  {
    rule: 'a choice that the option does not have',
    change: ({ build }) => (step(build, 'plate-on').when = { option: 'plate', is: ['fitted', 'large'] }),
    at: ['build.yaml', 'is:'],
    says: '"large" is no choice of "plate".',
    mend: 'Write one of: fitted, none.',
  },
  {
    rule: 'a hold point that nobody is named to sign',
    change: ({ route }) => route.holdPoints.splice(1, 1),
    at: ['build.yaml', 'holdPoint: caps-marked'],
    says: 'The route "test-route" doesn\'t say who signs "caps-marked".',
    mend: 'Add it to the "holdPoints" of the route.',
  },
  {
    rule: 'an option that is there twice',
    change: ({ route }) => route.options.push({ ...route.options[0]!, ask: 'Plate, again?' }),
    edit: ['route', '  - id: plate\n    ask: Plate, again?', '  - ask: Plate, again?\n    id: plate'],
    at: ['route.yaml', 'Plate, again?'],
    says: 'The option "plate" is there twice.',
    mend: 'Keep it once.',
  },
];

describe('a reference', () => {
  it.each(references)('tells $rule, with file, line and mend', expectTold);
});

const plans: Broken[] = [
  {
    rule: 'a removal without a refit',
    change: ({ build }) => drop(build, 'tray-on'),
    at: ['strip.yaml', '- id: tray-off'],
    says: '"tray" is taken off and never goes on again.',
    mend: 'Add a "refit" step for it further on.',
  },
  {
    rule: 'a refit that one option leaves out',
    change: ({ strip }) => delete step(strip, 'plate-off').when,
    at: ['strip.yaml', '- id: plate-off'],
    says: '"plate" is taken off and never goes on again.',
    mend: 'Add a "refit" step for it further on.',
  },
  {
    rule: 'a refit of what never came off',
    change: ({ strip }) => drop(strip, 'tray-off'),
    at: ['build.yaml', '- id: tray-on'],
    says: '"tray" is refitted but was not taken off before.',
    mend: 'Add its "remove" step, or correct the item.',
  },
  {
    rule: 'a temporary thing that stays in',
    change: ({ build }) => drop(build, 'strap-out'),
    at: ['strip.yaml', '- id: strap'],
    says: '"strap" is put in and never comes out again.',
    mend: 'Add a "remove" step for it further on.',
  },
  {
    rule: 'a count out without its count in',
    change: ({ build }) => {
      drop(build, 'rags-in');
      stepOf(build, 'clear-to-close', 'hold').covers = ['caps'];
    },
    at: ['strip.yaml', '- id: rags-out'],
    says: '"rags" is counted out and never counted back.',
    mend: 'Add a "count" step with "side: in" further on.',
  },
  {
    rule: 'a count in without its count out',
    change: ({ strip }) => drop(strip, 'rags-out'),
    at: ['build.yaml', '- id: rags-in'],
    says: '"rags" is counted back but was not counted out before.',
    mend: 'Add its "count" step with "side: out".',
  },
  {
    rule: 'a thing taken off twice',
    change: ({ strip }) => (stepOf(strip, 'sump-off', 'remove').item = 'tray'),
    at: ['strip.yaml', '- id: sump-off'],
    says: '"tray" is opened twice before it is closed.',
    mend: 'Close it first, or give one of the two another name.',
  },
  {
    rule: 'a one-use thing refitted without a new part',
    change: ({ build }) => delete stepOf(build, 'plate-on', 'refit').part,
    at: ['build.yaml', '- id: plate-on'],
    says: '"plate" serves once, but its refit names no new part.',
    mend: 'Add "part" with the new part whose lot is asked.',
  },
  {
    rule: 'a turn of the crank on a dry shell',
    change: ({ strip }) => (step(strip, 'clean').sets = { thread: 'gone', cap: 'on' }),
    at: ['strip.yaml', '- id: turn-to'],
    says: 'The crank turns in "strip.turn-to" while rod 2 is left with dry shells.',
    mend: 'Close every rod before the turn: cap on, shells oiled, thread gone.',
  },
  {
    rule: 'a turn of the crank with a cap off',
    change: ({ strip }) => {
      step(strip, 'clean').sets = { thread: 'gone', shells: 'oiled' };
      drop(strip, 'nip');
    },
    at: ['strip.yaml', '- id: turn-to'],
    says: 'The crank turns in "strip.turn-to" while rod 2 is left with its cap off.',
    mend: 'Close every rod before the turn: cap on, shells oiled, thread gone.',
  },
  {
    rule: 'a turn of the crank on laid thread',
    change: ({ strip }) => (step(strip, 'clean').sets = { shells: 'oiled', cap: 'on' }),
    at: ['strip.yaml', '- id: turn-to'],
    says: 'The crank turns in "strip.turn-to" while rod 2 is left with thread laid.',
    mend: 'Close every rod before the turn: cap on, shells oiled, thread gone.',
  },
  {
    rule: 'a reading without thread',
    change: ({ strip }) => delete step(strip, 'lay').sets,
    at: ['strip.yaml', '- id: gauge'],
    says: 'The thread is read while none is laid or the cap is on.',
    mend: 'Lay the thread, squeeze it and take the cap off before the reading.',
  },
  {
    rule: 'bolts tightened with the cap off',
    change: ({ strip }) => delete step(strip, 'cap-on').sets,
    at: ['strip.yaml', '- id: squeeze'],
    says: 'Bolts are tightened while the cap is off.',
    mend: 'Put the cap on in a step before this one, with "sets: { cap: on }".',
  },
  {
    rule: 'a final fit that is not of class A',
    change: ({ build }) => (step(build, 'tighten').class = 'B'),
    at: ['build.yaml', '- id: tighten'],
    says: 'The final fit of a rod cap is of class A.',
    mend: 'Write "class: A".',
  },
  {
    rule: 'a gate that the open list bars for ever',
    change: ({ build }) => {
      const close = build.sections.find(({ id }) => id === 'close')!;
      const run = build.sections.find(({ id }) => id === 'run')!;
      run.steps.push(step(build, 'sump-on'));
      close.steps = close.steps.filter(({ id }) => id !== 'sump-on');
    },
    at: ['build.yaml', '- id: clear-to-start'],
    says: '"sump" is still open here and bars this step (start).',
    mend: 'Close it before this step, in "build.sump-on", or take "start" out of what it bars.',
  },
  {
    rule: 'a move while something bars moving',
    change: ({ strip }) => (step(strip, 'tray-off').moves = true),
    at: ['strip.yaml', '- id: tray-off'],
    says: '"strap" is still open here and bars this step (move).',
    mend: 'Close it before this step, in "build.strap-out", or take "move" out of what it bars.',
  },
  {
    rule: 'more tightenings than a bolt may see',
    change: ({ engine }) => (engine.boltSets[1]!.tightenings = 1),
    at: ['build.yaml', '- id: tighten'],
    says: 'Here the "new" bolts are tightened 2 times; the sheet allows 1.',
    mend: 'Use another bolt set, or fewer cycles.',
  },
  {
    rule: 'measuring and final fit together over what a bolt may see',
    change: ({ engine }) => {
      engine.measuringBolts = 'new';
      engine.boltSets[1]!.tightenings = 3;
    },
    at: ['build.yaml', '- id: tighten'],
    says: 'Here the "new" bolts are tightened 4 times; the sheet allows 3.',
    mend: 'Use another bolt set, or fewer cycles.',
  },
  {
    rule: 'a timed check after the end of its watch',
    change: ({ build }) => (stepOf(build, 'warm', 'watch').checks[1]!.atSeconds = 901),
    at: ['build.yaml', '- id: warm'],
    says: 'The check "leaks" is due after the 15 minutes of the watch.',
    mend: 'Let it be due earlier, or watch longer.',
  },
];

describe('a plan', () => {
  it.each(plans)('tells $rule, with file, line and mend', expectTold);

  it('tells a class A tightening that no later hold point covers', () => {
    const all = files(({ build }) => {
      stepOf(build, 'clear-to-start', 'hold').covers = ['oil'];
      step(build, 'sump-bolts').class = 'A';
    });
    expect(checkDocuments(all).problems).toEqual([
      {
        file: 'build.yaml',
        line: lineWith(all, 'build.yaml', '- id: sump-bolts'),
        message: 'This class A tightening is followed by no hold point that covers it.',
        mend: 'Add a hold point after it, or name it in the "covers" of one.',
      },
    ]);
  });

  it('tells a rod that is left open at the end of the route', () => {
    const all = files(({ build }) => {
      const caps = build.sections.find(({ id }) => id === 'caps')!;
      caps.steps = caps.steps.filter(({ kind }) => kind !== 'turn');
      step(build, 'side').sets = { cap: 'off' };
      drop(build, 'turns');
    });
    expect(checkDocuments(all).problems).toContainEqual({
      file: 'build.yaml',
      line: lineWith(all, 'build.yaml', '- id: side'),
      message: 'At the end of the route rod 2 is left with its cap off.',
      mend: 'Close every rod: cap on, shells oiled, thread gone.',
    });
  });

  it('is made for every combination of the options', () => {
    const choice = (id: string) => ({ id, label: id });
    const option = (id: string) => ({ id, ask: id, choices: [choice('a'), choice('b')] });
    expect(combine([option('x'), option('y')])).toEqual([
      { x: 'a', y: 'a' },
      { x: 'a', y: 'b' },
      { x: 'b', y: 'a' },
      { x: 'b', y: 'b' },
    ]);
    const many = files(({ route }) => {
      route.options.push(...'abcdefgh'.split('').map((name) => option(`option-${name}`)));
    });
    expect(checkDocuments(many).problems).toEqual([
      {
        file: 'route.yaml',
        line: lineWith(many, 'route.yaml', 'options:'),
        message: 'The options make more than 256 different plans.',
        mend: 'Ask fewer options, or split the route.',
      },
    ]);
  });
});

/* The old shells while they are graded: what a touch does to one of them, and when all of them are. */
import type { WearMapRod, WearMapShell } from '@/components/WearMap';
import type { ShellPlace } from '@/domain/job-wear';
import { type GradedShell, WEAR_FLAGS, type WearFlag, type WearGrade } from '@/domain/wear';
import { lookWords, shellName } from '@/domain/wear-words';

/** What is said of each shell so far, by its name. */
export type Grading = Readonly<Record<string, { grade?: WearGrade | undefined; flags: readonly WearFlag[] }>>;

/** What the next touch of a shell gives it: a grade, or a sign that a second touch takes off again. */
export type Brush = WearGrade | WearFlag;

/** The grading after a shell was touched. */
export function touched(grading: Grading, name: string, brush: Brush): Grading {
  const present = grading[name] ?? { flags: [] };
  if (typeof brush === 'number') return { ...grading, [name]: { ...present, grade: brush } };
  const has = present.flags.includes(brush);
  const flags = WEAR_FLAGS.filter((flag) => (flag === brush ? !has : present.flags.includes(flag)));
  return { ...grading, [name]: { ...present, flags } };
}

/** The shells that have no grade yet. */
export function ungraded(places: readonly ShellPlace[], grading: Grading): ShellPlace[] {
  return places.filter((place) => grading[shellName(place)]?.grade === undefined);
}

/** Gives all that have no grade yet this one. */
export function fillOthers(places: readonly ShellPlace[], grading: Grading, grade: WearGrade): Grading {
  return ungraded(places, grading).reduce((sum, place) => touched(sum, shellName(place), grade), grading);
}

/** The grading as it is recorded; undefined while a shell has no grade. */
export function shellsOf(places: readonly ShellPlace[], grading: Grading): RecordedShell[] | undefined {
  const shells = places.flatMap((place) => {
    const { grade, flags = [] } = grading[shellName(place)] ?? {};
    return grade === undefined ? [] : [{ ...place, grade, flags: [...flags] }];
  });
  return shells.length === places.length ? shells : undefined;
}

type RecordedShell = Omit<GradedShell, 'flags'> & { flags: WearFlag[] };

/** A recorded grading, to be looked at again. */
export function gradingOf(shells: readonly GradedShell[]): Grading {
  return Object.fromEntries(
    shells.map((shell) => [shellName(shell), { grade: shell.grade, flags: shell.flags }]),
  );
}

/** The bench as it is drawn. */
export function benchOf(places: readonly ShellPlace[], grading: Grading): WearMapRod[] {
  const rods = [...new Set(places.map(({ rod }) => rod))];
  const shell = (rod: number, half: 'U' | 'L'): WearMapShell => {
    const name = shellName({ rod, half });
    const { grade, flags = [] } = grading[name] ?? {};
    const signs = { grade, marks: flags };
    return { name, ...signs, words: grade === undefined ? openWords(flags) : lookWords({ grade, flags }) };
  };
  return rods.map((rod) => ({ rod: String(rod), upper: shell(rod, 'U'), lower: shell(rod, 'L') }));
}

function openWords(flags: readonly WearFlag[]): string {
  return ['no grade yet', ...flags].join(', ');
}

/* Graded old shells in words, the same on the Floor, the job's page, the trail and in print. */
import type { ShellHalf } from './plan';
import { type GradedShell, WEAR_FLAGS, WEAR_GRADES, WEAR_SIGNS, type WearGrade, type WearMap } from './wear';

/** What is written on the back of a shell, as "3U". */
export function shellName({ rod, half }: { rod: number; half: ShellHalf }): string {
  return `${rod}${half}`;
}

/** The name of a grade, as "fine lines". */
export function gradeName(grade: WearGrade): string {
  return WEAR_GRADES.find((one) => one.grade === grade)?.name ?? String(grade);
}

/** What is seen on one shell, as "copper showing, heat". */
export function lookWords({ grade, flags }: Pick<GradedShell, 'grade' | 'flags'>): string {
  return [gradeName(grade), ...flags.map((flag) => WEAR_SIGNS[flag].name)].join(', ');
}

/** A whole grading in one line, as "1U, 2U fine lines; 3L copper showing; 3L heat". */
export function gradingWords(shells: readonly GradedShell[]): string {
  const namesOf = (some: readonly GradedShell[]): string =>
    some.length === shells.length && some.length > 1 ? 'all' : some.map(shellName).join(', ');
  const lines = [
    ...WEAR_GRADES.map(({ grade, name }) => ({ name, some: shells.filter((one) => one.grade === grade) })),
    ...WEAR_FLAGS.map((flag) => ({
      name: WEAR_SIGNS[flag].name,
      some: shells.filter(({ flags }) => flags.includes(flag)),
    })),
  ];
  return lines.flatMap(({ name, some }) => (some.length === 0 ? [] : `${namesOf(some)} ${name}`)).join('; ');
}

/** The means of both halves, as "Mean grade: uppers 1.2, lowers 0.3"; a half that was not graded is left out. */
export function meansWords({ meanUpper, meanLower }: Pick<WearMap, 'meanUpper' | 'meanLower'>): string {
  const means = [
    { half: 'uppers', mean: meanUpper },
    { half: 'lowers', mean: meanLower },
  ].flatMap(({ half, mean }) => (Number.isNaN(mean) ? [] : `${half} ${mean.toFixed(1)}`));
  return `Mean grade: ${means.join(', ')}`;
}

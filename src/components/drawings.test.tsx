import { render, screen, within } from '@testing-library/react';
import { describe, expect, it, vi } from 'vitest';
import { BoltGlyph } from './BoltGlyph';
import { CapDrawing } from './CapDrawing';
import { ClearanceScale } from './ClearanceScale';
import { CrankDial } from './CrankDial';
import { EngineBelow } from './EngineBelow';
import { ProgrammeStrip } from './ProgrammeStrip';
import { ShellFace, type ShellFaceProps } from './ShellFace';
import { TrailStrip } from './TrailStrip';
import { benchRows } from './WearMap';

const running = { state: 'running', cycles: 3, cyclesDone: 1 } as const;

describe('BoltGlyph', () => {
  it.each([
    [{ name: '4B', state: 'waiting', cycles: 3, cyclesDone: 0 }, 'Bolt 4B, waiting, 0 of 3 cycles done'],
    [{ name: '4B', ...running, targetAngle: 110 }, 'Bolt 4B, cycle 2 of 3, 110° asked'],
    [
      { name: '4B', ...running, targetAngle: 110, turnedAngle: 60 },
      'Bolt 4B, cycle 2 of 3, 110° asked, 60° turned',
    ],
    [{ name: '4B', ...running, targetAngle: -90 }, 'Bolt 4B, cycle 2 of 3, release asked'],
    [{ name: '4B', state: 'marked', cycles: 3, cyclesDone: 3 }, 'Bolt 4B, marked, 3 of 3 cycles done'],
    [{ name: '4B', state: 'condemned', cycles: 3, cyclesDone: 2 }, 'Bolt 4B, condemned'],
  ] as const)('says its state in words: %#', (bolt, words) => {
    render(<BoltGlyph {...bolt} />);
    expect(screen.getByRole('img', { name: words })).toBeInTheDocument();
  });

  it('shows each state in shape, not in colour alone', () => {
    const shapes = (['waiting', 'marked', 'condemned'] as const).map((state) => {
      const { container } = render(<BoltGlyph name="1A" state={state} cycles={2} cyclesDone={1} />);
      return ['paint', 'bolt-cross', 'bolt-dot'].map((each) => container.querySelectorAll(`.${each}`).length);
    });
    expect(shapes).toEqual([
      [0, 0, 2],
      [1, 0, 2],
      [0, 1, 0],
    ]);
  });

  it('fills a dot for each cycle done', () => {
    const { container } = render(<BoltGlyph name="1A" state="running" cycles={5} cyclesDone={2} />);
    expect(container.querySelectorAll('.bolt-dot')).toHaveLength(5);
    expect(container.querySelectorAll('.bolt-dot.is-done')).toHaveLength(2);
  });

  it('is silent beside words that say it', () => {
    render(<BoltGlyph name="1A" {...running} isDecorative />);
    expect(screen.queryByRole('img')).toBeNull();
  });
});

describe('CapDrawing', () => {
  it('names the cap, the bolt in hand and both bolts', () => {
    render(
      <CapDrawing
        rod="4"
        inHand={['4B']}
        targetAngle={110}
        bolts={[
          { name: '4A', letter: 'A', ...running },
          { name: '4B', letter: 'B', ...running },
        ]}
      />,
    );
    expect(
      screen.getByRole('img', {
        name: 'Cap of rod 4 from below. in hand 4B. Bolt 4A, cycle 2 of 3. Bolt 4B, cycle 2 of 3, 110° asked',
      }),
    ).toBeInTheDocument();
  });

  it('draws only the bolt in hand heavily', () => {
    const { container } = render(
      <CapDrawing
        rod="4"
        inHand={['4B']}
        bolts={[
          { name: '4A', letter: 'A', ...running },
          { name: '4B', letter: 'B', ...running },
        ]}
      />,
    );
    const [a, b] = [...container.querySelectorAll('.bolt-head')].map((head) =>
      Number(head.getAttribute('stroke-width')),
    );
    expect(b).toBeGreaterThan(a!);
  });
});

describe('a bolt that is tightened to a torque', () => {
  it('shows and says the way it goes, and no angle', () => {
    const { container } = render(
      <CapDrawing rod="4" inHand={['4A']} turn="tighten" bolts={[{ name: '4A', letter: 'A', ...running }]} />,
    );
    expect(container.querySelectorAll('.turn-arrow')).toHaveLength(1);
    expect(screen.getByRole('img')).toHaveAccessibleName(/Bolt 4A, cycle 2 of 3, tightening asked$/);
  });
});

describe('EngineBelow', () => {
  const rod = (name: string, isInHand = false) => ({
    rod: name,
    words: isInHand ? 'cycle 2' : 'waiting',
    figure: '0.046',
    isInHand,
    bolts: [{ name: `${name}A`, ...running }],
  });

  it('lists the rods from the front and says which is in hand', () => {
    render(<EngineBelow pins={['1', '2', '3'].map((pin) => ({ pin, rods: [rod(pin, pin === '2')] }))} />);
    const rows = screen.getAllByText(/^(waiting|cycle 2)$/).map((words) => words.closest('.engine-rod'));
    expect(rows.map((row) => row?.getAttribute('aria-current'))).toEqual([null, 'step', null]);
    rows[1]?.querySelector('svg')?.remove();
    expect(rows[1]).toHaveTextContent('Rod 2, clearance 0.046 mm. Bolt 2A, cycle 2 of 3. cycle 2');
  });

  it('groups the two rods of a shared crankpin', () => {
    render(<EngineBelow pins={[{ pin: '1', rods: [rod('1'), rod('5')] }]} />);
    expect(within(screen.getByRole('list', { name: 'Crankpin 1' })).getAllByRole('listitem')).toHaveLength(2);
  });

  it('can be touched only where that does something', () => {
    const { rerender } = render(<EngineBelow pins={[{ pin: '1', rods: [rod('1')] }]} />);
    expect(screen.queryByRole('button')).toBeNull();
    rerender(<EngineBelow pins={[{ pin: '1', rods: [rod('1')] }]} onPick={vi.fn()} />);
    expect(screen.getByRole('button')).toBeInTheDocument();
  });
});

describe('CrankDial', () => {
  it('says where the crank stands and goes', () => {
    render(<CrankDial angle={120} targetAngle={240} />);
    expect(screen.getByRole('img', { name: 'Crank at 120°, turn to 240°' })).toBeInTheDocument();
  });
});

describe('ProgrammeStrip', () => {
  it('marks the present pass and says how far each is', () => {
    render(
      <ProgrammeStrip
        label="Programme of 4B"
        cycles={[
          {
            name: 'cycle 1',
            passes: [
              { label: '8 N·m', state: 'done' },
              { label: '110°', state: 'now' },
            ],
          },
        ]}
      />,
    );
    const [first, second] = screen.getAllByRole('listitem');
    expect(first).toHaveTextContent('8 N·m, done');
    expect(second).toHaveTextContent('110°, now');
    expect(second).toHaveAttribute('aria-current', 'step');
  });
});

describe('ClearanceScale', () => {
  const read = (value: number, text: string) => ({ value, text, uncertainty: 0.002 });

  it('says each reading with its end and uncertainty, and who waits', () => {
    render(<ClearanceScale unit="mm" rods={[{ rod: '1', front: read(0.051, '0.051') }, { rod: '2' }]} />);
    const [first, second] = screen.getAllByRole('listitem');
    expect(first).toHaveTextContent('Rod 1front 0.051 plus or minus 0.002rear –');
    expect(second).toHaveTextContent('Rod 2waiting');
  });

  it('draws the band only between limits that are known', () => {
    const { container } = render(
      <ClearanceScale
        unit="mm"
        low={{ value: 0.02, text: '0.020' }}
        rods={[{ rod: '1', front: read(0.03, '0.030') }]}
      />,
    );
    expect(container.querySelectorAll('.scale-limit')).toHaveLength(1);
    expect(screen.queryByText('wide')).toBeNull();
  });

  it('keeps a reading beyond the limits within the drawing', () => {
    const { container } = render(
      <ClearanceScale
        unit="mm"
        low={{ value: 0.02, text: '0.020' }}
        high={{ value: 0.06, text: '0.060' }}
        rods={[{ rod: '1', rear: read(0.2, '0.200') }]}
      />,
    );
    const place = parseFloat(
      container.querySelector('.clearance-row .reading-rear')?.getAttribute('cx') ?? '',
    );
    expect(place).toBeGreaterThan(90);
    expect(place).toBeLessThan(100);
  });
});

describe('TrailStrip', () => {
  it('says the position, the phases and the signatures', () => {
    render(
      <TrailStrip
        total={40}
        position={12}
        phases={[{ name: 'strip-down', from: 1, to: 40 }]}
        signatures={[{ at: 40, words: 'Signed clear to close' }]}
      />,
    );
    expect(
      screen.getByRole('img', {
        name: 'Entry 12 of 40. strip-down, entries 1 to 40. Signed clear to close at entry 40',
      }),
    ).toBeInTheDocument();
  });
});

describe('ShellFace', () => {
  const drawingOf = (props: ShellFaceProps) => {
    const { container, unmount } = render(<ShellFace {...props} />);
    const shapes = container.querySelector('svg')?.innerHTML ?? '';
    unmount();
    return shapes;
  };

  it('tells every grade and every sign by its shapes', () => {
    const faces = [
      drawingOf({}),
      ...([1, 2, 3, 4] as const).map((grade) => drawingOf({ grade })),
      ...(['heat', 'debris', 'edge', 'pitting'] as const).map((mark) => drawingOf({ marks: [mark] })),
    ];
    expect(new Set(faces).size).toBe(faces.length);
  });

  it('hatches copper inside its patch', () => {
    const { container } = render(<ShellFace grade={3} />);
    const hatch = [...container.querySelectorAll('.shell-lines')].at(-1)?.getAttribute('d') ?? '';
    const points = [...hatch.matchAll(/(-?[\d.]+) (-?[\d.]+)/g)].map(([, x, y]) => [Number(x), Number(y)]);
    expect(points.length).toBeGreaterThan(20);
    for (const [x = NaN, y = NaN] of points)
      expect(((x - 52) / 21) ** 2 + ((y - 24) / 11) ** 2).toBeCloseTo(1, 1);
  });
});

describe('the bench of old shells', () => {
  const rods = (count: number) => Array.from({ length: count }, (_, i) => ({ rod: String(i + 1) }));

  it.each([
    [4, [4]],
    [8, [8]],
    [10, [5, 5]],
    [12, [6, 6]],
    [0, []],
  ])('of %i rods has rows of %j', (count, rows) => {
    expect(benchRows(rods(count)).map(({ length }) => length)).toEqual(rows);
  });
});

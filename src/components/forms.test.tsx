import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { Button } from './Button';
import { Checkbox } from './Checkbox';
import { CheckRow } from './CheckRow';
import { ChoiceRows } from './ChoiceRows';
import { SelectField } from './SelectField';
import { TextArea } from './TextArea';
import { TextField } from './TextField';

describe('TextField', () => {
  it('ties the error, then the hint, to the input', () => {
    render(<TextField label="VIN" hint="17 signs" error="One sign is missing. Read the plate again." />);
    const input = screen.getByRole('textbox', { name: 'VIN' });
    expect(input).toHaveAccessibleDescription('One sign is missing. Read the plate again. 17 signs');
    expect(input).toBeInvalid();
  });

  it('hands the input to a form library by ref and name', async () => {
    const ref = vi.fn();
    const onChange = vi.fn();
    render(<TextField label="Registration" name="registration" ref={ref} onChange={onChange} />);
    await userEvent.type(screen.getByLabelText('Registration'), 'KX');
    expect(ref).toHaveBeenCalledWith(screen.getByLabelText('Registration'));
    expect(onChange).toHaveBeenCalledTimes(2);
  });

  it('says which fields may stay empty', () => {
    render(<TextArea label="Note" isOptional />);
    expect(screen.getByLabelText('Note (optional)')).toBeValid();
  });
});

describe('SelectField', () => {
  it('begins with nothing chosen', async () => {
    render(
      <SelectField
        label="Engine"
        emptyLabel="Choose an engine"
        options={[{ value: 's6', label: 'Inline six' }]}
      />,
    );
    expect(screen.getByLabelText('Engine')).toHaveValue('');
    await userEvent.selectOptions(screen.getByLabelText('Engine'), 'Inline six');
    expect(screen.getByLabelText('Engine')).toHaveValue('s6');
  });
});

describe('Checkbox', () => {
  it('ties its error to the box', () => {
    render(<Checkbox label="Old parts go back" error="Say what becomes of the old parts." />);
    expect(screen.getByRole('checkbox')).toHaveAccessibleDescription('Say what becomes of the old parts.');
  });
});

describe('Button', () => {
  it('takes no second press while it waits for an answer', async () => {
    const onClick = vi.fn();
    render(
      <Button isBusy onClick={onClick}>
        Save
      </Button>,
    );
    await userEvent.click(screen.getByRole('button', { name: 'Save' }));
    expect(onClick).not.toHaveBeenCalled();
  });
});

describe('ChoiceRows', () => {
  const choices = [
    { value: 'yes', label: 'Yes' },
    { value: 'unsure', label: 'Not sure', note: 'both bolts start again' },
    { value: 'no', label: 'No', why: 'already recorded' },
  ];

  it('tells what was chosen', async () => {
    const onChoose = vi.fn();
    render(<ChoiceRows label="Was it turned?" choices={choices} onChoose={onChoose} />);
    await userEvent.click(screen.getByRole('radio', { name: 'Not sure' }));
    expect(onChoose).toHaveBeenCalledExactlyOnceWith('unsure');
  });

  it('bars an answer and says why', async () => {
    const onChoose = vi.fn();
    render(<ChoiceRows label="Was it turned?" choices={choices} onChoose={onChoose} />);
    const barred = screen.getByRole('radio', { name: 'No' });
    expect(barred).toHaveAccessibleDescription('already recorded');
    expect(barred).toBeDisabled();
    await userEvent.click(barred);
    expect(onChoose).not.toHaveBeenCalled();
  });
});

describe('CheckRow', () => {
  it('is ticked and cleared by touching anywhere in the row', async () => {
    const onChange = vi.fn();
    render(<CheckRow label="Load proved" note="hook seen" isChecked={false} onChange={onChange} />);
    await userEvent.click(screen.getByText('hook seen'));
    expect(onChange).toHaveBeenCalledExactlyOnceWith(true);
  });
});

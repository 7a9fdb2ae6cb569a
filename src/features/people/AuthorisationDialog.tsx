import { useForm } from 'react-hook-form';
import { Button } from '@/components/Button';
import { DateField } from '@/components/DateField';
import { Dialog } from '@/components/Dialog';
import { TextField } from '@/components/TextField';
import { dayWords } from '@/domain/time-words';
import type { PersonRow } from './people-answer';

/** By what somebody signs, and the last day on which it counts. */
export type Authorised = Pick<PersonRow, 'certificate' | 'authorisedUntil'>;

/** The same in a cell; one that is over says so. */
export function SignsBy({ row, today }: { row: PersonRow; today: string }) {
  const { certificate, authorisedUntil } = row;
  const isOver = authorisedUntil !== null && authorisedUntil < today;
  return (
    <>
      {certificate && (
        <>
          <span className="figure">{certificate.number}</span>
          <span className="cell-note">{certificate.kind}</span>
        </>
      )}
      {authorisedUntil !== null && (
        <span className={isOver ? 'form-error block' : 'cell-note'}>
          {isOver ? 'over since' : 'until'} {dayWords(authorisedUntil)}
        </span>
      )}
    </>
  );
}

export interface AuthorisationDialogProps {
  person: PersonRow;
  onKeep: (authorisation: Authorised) => void;
  onClose: () => void;
}

/** Says by which certificate somebody signs and until when; what they signed stays as it was. */
export function AuthorisationDialog({ person, onKeep, onClose }: AuthorisationDialogProps) {
  const { register, handleSubmit, formState } = useForm({
    defaultValues: {
      number: person.certificate?.number ?? '',
      kind: person.certificate?.kind ?? '',
      until: person.authorisedUntil ?? '',
    },
  });
  const keep = handleSubmit(({ number, kind, until }) =>
    onKeep({
      certificate: number.trim() === '' ? null : { number: number.trim(), kind: kind.trim() },
      authorisedUntil: until === '' ? null : until,
    }),
  );
  const action = (
    <Button look="main" onClick={() => void keep()}>
      Keep
    </Button>
  );
  return (
    <Dialog
      title={`Authorisation of ${person.name}`}
      isOpen
      onClose={onClose}
      actions={action}
      closeLabel="Leave as it was"
    >
      <div className="form">
        <div className="form-pair">
          <TextField
            label="Certificate"
            hint="As it stands on the paper; it is printed beside their signatures."
            isOptional
            isFigure
            autoComplete="off"
            {...register('number', { maxLength: { value: 60, message: 'At most 60 characters.' } })}
            error={formState.errors.number?.message}
          />
          <TextField
            label="Kind"
            hint="Such as “master technician”."
            isOptional
            autoComplete="off"
            error={formState.errors.kind?.message}
            {...register('kind', {
              validate: (kind, { number }) =>
                (kind.trim() === '') === (number.trim() === '') ||
                'Certificate and kind go together: say both, or neither.',
            })}
          />
        </div>
        <DateField
          label="May sign until"
          hint="This day still counts. Left empty, no end is set. After it they sign no hold point, no countersign, no disposition of class A and no handover, on any tablet that has heard of it."
          isOptional
          {...register('until')}
        />
      </div>
    </Dialog>
  );
}

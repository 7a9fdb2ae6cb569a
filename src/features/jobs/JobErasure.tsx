import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { Checkbox } from '@/components/Checkbox';
import { Dialog } from '@/components/Dialog';
import { ErrorNote } from '@/components/ErrorNote';
import { TextField } from '@/components/TextField';
import { photosOf } from '@/domain/job-photos';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import type { JobAnswer } from './job-answer';

const FIELDS: readonly (readonly [field: string, label: string])[] = [
  ['customerName', 'Customer’s name'],
  ['customerEmail', 'Customer’s e-mail, and the letters sent to it'],
  ['customerPhone', 'Customer’s telephone'],
  ['approver', 'Who may approve extra work'],
  ['complaint', 'Complaint'],
  ['registration', 'Registration'],
  ['vin', 'VIN'],
];

/** For the owner, once a job has ended: who the customer was and which vehicle, deleted for good. */
export function JobErasure({ job }: { job: JobAnswer }) {
  const [isOpen, setOpen] = useState(false);
  const marked = photosOf(job.jobState).filter(({ identity }) => identity === true);
  const left = FIELDS.filter(([field]) => job.identity[field] !== undefined);
  if (left.length === 0) return null;
  return (
    <section className="part no-print">
      <h2 className="part-title">Personal data</h2>
      <p className="page-words">
        The trail holds nothing of the customer but proofs: it stays whole when this goes. What is erased
        can&rsquo;t be brought back, not from a backup either.
      </p>
      <Button look="quiet" onClick={() => setOpen(true)}>
        Erase personal data
      </Button>
      {isOpen && (
        <ErasureDialog
          job={job.id}
          left={left}
          photographs={marked.map(({ hash }) => hash)}
          onClose={() => setOpen(false)}
        />
      )}
    </section>
  );
}

interface ErasureDialogProps {
  job: string;
  left: readonly (readonly [field: string, label: string])[];
  photographs: readonly string[];
  onClose: () => void;
}

function ErasureDialog({ job, left, photographs, onClose }: ErasureDialogProps) {
  const client = useQueryClient();
  const [fields, setFields] = useState<readonly string[]>(left.map(([field]) => field));
  const [withPictures, setWithPictures] = useState(photographs.length > 0);
  const [reason, setReason] = useState('');
  const [trouble, setTrouble] = useState<string>();
  const toggle = (field: string) =>
    setFields(fields.includes(field) ? fields.filter((one) => one !== field) : [...fields, field]);
  const erase = async () => {
    const body = { fields, photographs: withPictures ? photographs : [], reason: reason.trim() };
    const erased = await callServer(offlineOfThisPage(), {
      method: 'POST',
      path: `/api/jobs/${job}/erase`,
      body,
      answer: z.looseObject({}),
    });
    if (!erased.ok) {
      setTrouble(erased.why);
      return;
    }
    await client.invalidateQueries();
    onClose();
  };
  const isNothing = fields.length === 0 && !withPictures;
  return (
    <Dialog
      title="Erase personal data for good"
      isOpen
      onClose={onClose}
      closeLabel="Keep everything"
      actions={
        <Button look="stop" disabled={isNothing || reason.trim() === ''} onClick={() => void erase()}>
          Erase for good
        </Button>
      }
    >
      <div className="grid gap-3">
        {left.map(([field, label]) => (
          <Checkbox
            key={field}
            label={label}
            checked={fields.includes(field)}
            onChange={() => toggle(field)}
          />
        ))}
        {photographs.length > 0 && (
          <Checkbox
            label={`${photographs.length} ${photographs.length === 1 ? 'photograph' : 'photographs'} marked “shows identity”`}
            checked={withPictures}
            onChange={() => setWithPictures(!withPictures)}
          />
        )}
        <TextField
          label="Reason"
          value={reason}
          maxLength={500}
          onChange={(event) => setReason(event.target.value)}
          hint="It stays in the trail, so write no name into it."
        />
      </div>
      {trouble !== undefined && (
        <ErrorNote happened={trouble} kept="Nothing was erased." next="Mend it and try again." />
      )}
    </Dialog>
  );
}

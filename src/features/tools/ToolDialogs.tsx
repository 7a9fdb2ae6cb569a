import { Button } from '@/components/Button';
import { Dialog } from '@/components/Dialog';
import { factsBody, ToolFields, useToolFacts } from './ToolFields';
import { useToolChange } from './send-tool';
import type { ToolAnswer } from './tool-answer';

export interface AddToolDialogProps {
  onClose: () => void;
  /** Called with the page of the tool once it is added. */
  goTo: (path: string) => void;
}

/** Adds a tool, and goes to its page, where its calibration is entered. */
export function AddToolDialog({ onClose, goTo }: AddToolDialogProps) {
  const form = useToolFacts();
  const { send, trouble } = useToolChange();
  const add = form.handleSubmit(async (facts) => {
    const id = await send('POST', '/api/tools', factsBody(facts));
    if (id !== undefined) goTo(`/tools/${id}`);
  });
  const action = (
    <Button look="main" onClick={() => void add()} isBusy={form.formState.isSubmitting}>
      Add the tool
    </Button>
  );
  return (
    <Dialog title="Add a tool" isOpen onClose={onClose} actions={action} closeLabel="Leave it">
      <ToolFields form={form} trouble={trouble} />
    </Dialog>
  );
}

/** Changes a tool's facts; what was done with it keeps those that it had then. */
export function ChangeToolDialog({ tool, onClose }: { tool: ToolAnswer; onClose: () => void }) {
  const form = useToolFacts(tool);
  const { send, trouble } = useToolChange();
  const keep = form.handleSubmit(async (facts) => {
    const changed = await send('PATCH', `/api/tools/${tool.id}`, factsBody(facts));
    if (changed !== undefined) onClose();
  });
  const action = (
    <Button look="main" onClick={() => void keep()} isBusy={form.formState.isSubmitting}>
      Keep
    </Button>
  );
  return (
    <Dialog
      title={`Facts of ${tool.name}`}
      isOpen
      onClose={onClose}
      actions={action}
      closeLabel="Leave as it was"
    >
      <ToolFields form={form} trouble={trouble} />
    </Dialog>
  );
}

/*
 * jsdom knows the dialog element but can't show it. This gives it the part that components rely on: it is open or
 * not, and Escape is a `cancel` that may be prevented. Keeping the focus inside is the browser's own and is tested there.
 */
export function teachDialogs(prototype: HTMLDialogElement): void {
  prototype.showModal = function showModal(this: HTMLDialogElement) {
    this.open = true;
  };
  prototype.close = function close(this: HTMLDialogElement) {
    if (!this.open) return;
    this.open = false;
    this.dispatchEvent(new Event('close'));
  };
}

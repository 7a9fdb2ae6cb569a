/*
 * What components rely on and jsdom lacks. It knows the dialog element but can't show it, so a dialog here is open
 * or not, and Escape is a `cancel` that may be prevented; keeping the focus inside is the browser's own. It lays
 * nothing out, so there is nothing to scroll.
 */
export function fillJsdomGaps(): void {
  HTMLDialogElement.prototype.showModal = function showModal(this: HTMLDialogElement) {
    this.open = true;
  };
  HTMLDialogElement.prototype.close = function close(this: HTMLDialogElement) {
    if (!this.open) return;
    this.open = false;
    this.dispatchEvent(new Event('close'));
  };
  Element.prototype.scrollIntoView = () => undefined;
}

/** Whether a key pressed there belongs to a field, the editor or a dialog, so that the page's own keys stay out of it. */
export function isTyping(target: EventTarget | null): boolean {
  return target instanceof HTMLElement && (target.isContentEditable || ['INPUT', 'TEXTAREA', 'SELECT'].includes(target.tagName) || target.closest('.monaco-editor, dialog') !== null)
}

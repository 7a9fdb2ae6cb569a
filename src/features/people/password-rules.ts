/** What a new password has to be, said beside its field; the server decides. */
export const PASSWORD_HINT =
  'Ten characters at least. Three words that only you would put together are good.';

/** The rules for a new password as a form checks them before it asks the server. */
export const NEW_PASSWORD = {
  required: 'Choose a password.',
  minLength: { value: 10, message: 'Ten characters at least. Add some more.' },
  maxLength: { value: 128, message: '128 characters at most. Leave some out.' },
};

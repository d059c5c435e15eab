export { enqueue, type Said } from './enqueue';
export { deliver, messageId } from './deliver';
export { letters, type LetterKind, type PayloadOf } from './letters';
export { sweep } from './sweep';

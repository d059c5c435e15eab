export { keepFile, plainName, type FileToKeep, type KeptFile } from './keep-file';
export { forgetStore } from './object-store';
export { ofWork, open, type ListedFile } from './read-file';
export { receiveBody } from './receive-body';
export { sniffText, type SniffedText } from './sniff';
export { tidy } from './tidy';
